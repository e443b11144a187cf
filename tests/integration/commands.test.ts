import { execFile } from 'node:child_process';
import fs from 'node:fs/promises';
import net from 'node:net';
import path from 'node:path';
import { promisify } from 'node:util';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { GET as notebooksRoute } from '@/app/api/notebooks/route';
import { commandSocket, serveCommands, type CommandAnswer } from '@/server/commands/socket';
import { token } from '@/server/db/schema/people';
import { call, startLaboratory, type Laboratory } from './harness';

let lab: Laboratory;
let stop: () => void;
beforeAll(async () => {
  await promisify(execFile)('node', ['server/commands/build.mjs']);
  lab = await startLaboratory();
  stop = await serveCommands();
});
afterAll(async () => {
  stop();
  await lab.close();
});

function send(text: string): Promise<CommandAnswer> {
  return new Promise((resolve, reject) => {
    const socket = net.connect(commandSocket());
    let answer = '';
    socket.on('error', reject);
    socket.on('data', (chunk) => (answer += String(chunk)));
    socket.on('end', () => resolve(JSON.parse(answer) as CommandAnswer));
    socket.on('connect', () => socket.end(text));
  });
}

const run = (...args: string[]) =>
  promisify(execFile)('node', ['dist/commands/run.mjs', ...args], {
    env: { ...process.env, DATA_DIR: lab.dataDir, DEMO: 'off' },
  });

it('the socket belongs to this user alone: mode 0600', async () => {
  const { mode } = await fs.stat(path.join(lab.dataDir, 'command.sock'));
  expect(mode & 0o777).toBe(0o600);
});

it('`token` runs inside the server that holds the database and prints one token, nothing else', async () => {
  const { stdout, stderr } = await run('token', lab.people.author.email);
  expect(stderr).toBe('');
  expect(stdout).toMatch(/^kl_[\w-]{32}\n$/);
  const secret = stdout.trim();
  const listed = await call<{ notebooks: unknown[] }>(notebooksRoute, {
    headers: { authorization: `Bearer ${secret}` },
  });
  expect(listed.status).toBe(200);
  expect(listed.body.notebooks).toHaveLength(1);
  // Only its hash is kept.
  expect(JSON.stringify(await lab.db.select().from(token))).not.toContain(secret);
});

it('an unknown person, an unknown command and a broken request are refused with a sentence', async () => {
  const unknown = await run('token', 'nobody@laboratory.example').catch(
    (error: { code: number; stderr: string }) => error,
  );
  expect(unknown).toMatchObject({ code: 1, stderr: expect.stringContaining('Nobody with the address') });
  expect(await send(JSON.stringify({ name: 'constructor', args: [] }))).toEqual({
    ok: false,
    sentence: 'There is no command constructor.',
  });
  expect(await send('not json')).toMatchObject({ ok: false });
  const usage = await run('nonsense').catch((error: { code: number; stderr: string }) => error);
  expect(usage).toMatchObject({ code: 2, stderr: expect.stringContaining('Commands:') });
});

it('`invite` prints a link of this installation', async () => {
  const { stdout } = await run('invite', 'new@laboratory.example', 'Nora Ny');
  expect(stdout).toMatch(/^http:\/\/localhost:3999\/join\?token=[\w-]{32}\n$/);
});
