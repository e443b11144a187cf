import { createWriteStream } from 'node:fs';
import fs from 'node:fs/promises';
import path from 'node:path';
import { pipeline } from 'node:stream/promises';
import type { Transport } from 'nodemailer';

/** Stand-in for a mail server: writes each message, as it would go over the wire, to `<dataDir>/mailbox/<time>.eml`. */
export function localMailbox(dataDir: string): Transport<{ file: string }> {
  const folder = path.join(dataDir, 'mailbox');
  return {
    name: 'local mailbox',
    version: '1',
    send(mail, done) {
      const write = async () => {
        await fs.mkdir(folder, { recursive: true, mode: 0o700 });
        const file = path.join(folder, `${Date.now()}-${process.hrtime.bigint()}.eml`);
        await pipeline(mail.message.createReadStream(), createWriteStream(file, { mode: 0o600 }));
        return file;
      };
      write().then(
        (file) => done(null, { file }),
        (error: Error) => done(error, null as never),
      );
    },
  };
}
