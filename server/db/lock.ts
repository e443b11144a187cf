import 'server-only';
import { createHash } from 'node:crypto';
import fs from 'node:fs';
import net from 'node:net';
import path from 'node:path';

/**
 * Holds a folder for this process until it ends, in whatever way it ends.
 *
 * On Linux the lock is an abstract socket named after the folder's real path, which the kernel drops with the process.
 * Elsewhere it is a socket file beside the folder; one that nobody answers on is left from a killed process and is taken over.
 * Exception: processes in different network namespaces do not see each other's abstract sockets.
 *
 * @throws Error with a sentence when another process holds it.
 */
export async function lockFolder(folder: string): Promise<() => void> {
  fs.mkdirSync(folder, { recursive: true, mode: 0o700 });
  const real = fs.realpathSync(folder);
  const name = createHash('sha256').update(real).digest('hex').slice(0, 32);
  const address =
    process.platform === 'linux' ? `\0kelvinleaf-${name}` : path.join(path.dirname(real), `.lock-${name.slice(0, 8)}`);
  if (process.platform !== 'linux' && !(await answers(address))) fs.rmSync(address, { force: true });
  const server = net.createServer((socket) => socket.destroy());
  try {
    await new Promise<void>((resolve, reject) => {
      server.once('error', reject);
      server.listen(address, resolve);
    });
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code !== 'EADDRINUSE') throw error;
    throw new Error(
      `Another Kelvinleaf process has the data folder ${real} open. Two at once would damage it, so this one stops. ` +
        'Nothing was changed. Stop the other process, or set DATA_DIR to another folder.',
      { cause: error },
    );
  }
  server.unref();
  return () => server.close();
}

function answers(address: string): Promise<boolean> {
  return new Promise((resolve) => {
    const socket = net.connect(address);
    socket.once('connect', () => {
      socket.destroy();
      resolve(true);
    });
    socket.once('error', () => resolve(false));
  });
}
