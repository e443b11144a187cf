import net from 'node:net';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { POST as forgottenRoute } from '@/app/api/auth/forgotten/route';
import { GET as mailboxRoute } from '@/app/api/mailbox/route';
import { POST as inviteRoute } from '@/app/api/administration/invitations/route';
import { mailMessage } from '@/server/db/schema/housekeeping';
import { listOutbox, queueMail, sendDueMail } from '@/server/mail/service';
import { call, startLaboratory, type Laboratory } from './harness';

/** A mail server of a few lines (RFC 5321): takes one mail at a time, and refuses recipients that it is told to. */
async function startMailServer() {
  const received: { from: string; to: string[]; data: string }[] = [];
  const refusing = new Set<string>();
  let silent = false;
  const sockets = new Set<net.Socket>();
  const server = net.createServer((socket) => {
    sockets.add(socket);
    socket.on('error', () => undefined /* the client hung up */);
    if (silent) return;
    socket.write('220 mail.example ESMTP\r\n');
    let mail = { from: '', to: [] as string[], data: '' };
    let inData = false;
    let buffer = '';
    socket.setEncoding('utf8');
    socket.on('data', (chunk: string) => {
      buffer += chunk;
      for (;;) {
        const end = inData ? buffer.indexOf('\r\n.\r\n') : buffer.indexOf('\r\n');
        if (end === -1) return;
        const line = buffer.slice(0, end);
        buffer = buffer.slice(end + (inData ? 5 : 2));
        if (inData) {
          received.push({ ...mail, data: line });
          mail = { from: '', to: [], data: '' };
          inData = false;
          socket.write('250 kept\r\n');
        } else if (/^(EHLO|HELO)/i.test(line)) socket.write('250 mail.example\r\n');
        else if (/^MAIL FROM:/i.test(line)) {
          mail.from = line.slice(10);
          socket.write('250 ok\r\n');
        } else if (/^RCPT TO:/i.test(line)) {
          const address = /<(.*)>/.exec(line)?.[1] ?? '';
          if (refusing.has(address)) socket.write('450 mailbox busy\r\n');
          else {
            mail.to.push(address);
            socket.write('250 ok\r\n');
          }
        } else if (/^DATA/i.test(line)) {
          inData = true;
          socket.write('354 go on\r\n');
        } else if (/^QUIT/i.test(line)) socket.end('221 bye\r\n');
        else socket.write('250 ok\r\n');
      }
    });
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.address() as net.AddressInfo;
  return {
    url: `smtp://127.0.0.1:${port}/?ignoreTLS=true`,
    received,
    refusing,
    setSilent: (value: boolean) => {
      silent = value;
    },
    close: () => {
      for (const socket of sockets) socket.destroy();
      return new Promise<void>((resolve) => server.close(() => resolve()));
    },
  };
}

let lab: Laboratory;
let server: Awaited<ReturnType<typeof startMailServer>>;
beforeAll(async () => {
  server = await startMailServer();
  lab = await startLaboratory({ SMTP_URL: server.url });
});
afterAll(async () => {
  delete process.env.SMTP_URL;
  await lab.close();
  await server.close();
});

const rowTo = async (recipient: string) => {
  const [row] = await lab.db.select().from(mailMessage).where(eq(mailMessage.recipient, recipient));
  return row;
};
const due = (recipient: string) =>
  lab.db.update(mailMessage).set({ nextAttemptAt: new Date() }).where(eq(mailMessage.recipient, recipient));

it('a mail is a row first and goes out over SMTP as it was written', async () => {
  const to = 'gunn@laboratory.example';
  await queueMail(lab.db, { to, subject: 'Prøve µ', lines: ['First line.', 'https://x.example/?a=1&b=2'] });
  expect(await rowTo(to)).toMatchObject({ sentAt: null, attempts: 0 });
  expect(server.received).toEqual([]);
  expect(await sendDueMail(lab.db)).toBe(1);
  const [mail] = server.received;
  expect(mail.to).toEqual([to]);
  expect(mail.data).toMatch(/^Subject: =\?UTF-8\?/m);
  expect(mail.data.replace(/=\r\n/g, '')).toContain('First line.');
  expect((await rowTo(to)).sentAt).not.toBeNull();
  expect(await sendDueMail(lab.db)).toBe(0);
  expect(server.received).toHaveLength(1);
});

it('a refused mail waits 1, 2, 4 minutes and is sent when the server takes it, once', async () => {
  const to = 'busy@laboratory.example';
  server.refusing.add(to);
  await queueMail(lab.db, { to, subject: 'Waiting', lines: ['x'] });
  for (const minutes of [1, 2, 4]) {
    const before = Date.now();
    expect(await sendDueMail(lab.db)).toBe(0);
    const row = await rowTo(to);
    const waitMs = row.nextAttemptAt.getTime() - before;
    expect(Math.round(waitMs / 60_000)).toBe(minutes);
    expect(row.problem).toContain('450');
    // Not due yet: nothing is tried.
    expect(await sendDueMail(lab.db)).toBe(0);
    expect((await rowTo(to)).attempts).toBe(row.attempts);
    await due(to);
  }
  server.refusing.clear();
  expect(await sendDueMail(lab.db)).toBe(1);
  expect(await rowTo(to)).toMatchObject({ attempts: 4, problem: null });
  expect(server.received.filter((mail) => mail.to.includes(to))).toHaveLength(1);
});

it('nothing that a person does waits for a mail server that never answers', async () => {
  server.setSilent(true);
  const start = performance.now();
  const invited = await call(inviteRoute, {
    as: lab.people.administrator,
    body: { email: 'slow@laboratory.example', name: 'Siri Sen', role: 'member' },
  });
  expect(invited.status).toBe(200);
  const reset = await call(forgottenRoute, { body: { email: lab.people.author.email } });
  expect(reset.status).toBe(200);
  expect(performance.now() - start).toBeLessThan(8000);
  expect(await rowTo('slow@laboratory.example')).toMatchObject({ attempts: 0, sentAt: null });
  server.setSilent(false);
});

it('an address with a line break is refused and adds no recipient; a subject loses it', async () => {
  for (const to of [
    'a@laboratory.example\r\nBcc: evil@evil.example',
    'a@laboratory.example\nRCPT TO:<evil@evil.example>',
  ]) {
    await expect(queueMail(lab.db, { to, subject: 'x', lines: ['x'] })).rejects.toThrow();
    const refused = await call(inviteRoute, {
      as: lab.people.administrator,
      body: { email: to, name: 'Siri Sen', role: 'member' },
    });
    expect(refused.status).toBe(422);
  }
  const to = 'subject@laboratory.example';
  await queueMail(lab.db, { to, subject: 'Title\r\nBcc: evil@evil.example', lines: ['x'] });
  await sendDueMail(lab.db);
  const mail = server.received.find((m) => m.to.includes(to));
  expect(mail?.to).toEqual([to]);
  expect(mail?.data).not.toMatch(/^Bcc:/m);
});

it('the administrator sees that a mail was sent, not its text, and no mailbox is open outside the demonstration', async () => {
  const lines = await listOutbox(lab.db);
  expect(lines.length).toBeGreaterThan(3);
  expect(JSON.stringify(lines)).not.toContain('token=');
  for (const line of lines) expect(Object.keys(line)).not.toContain('body');
  expect((await call(mailboxRoute)).status).toBe(404);
});
