import 'server-only';
import fs from 'node:fs';
import net from 'node:net';
import path from 'node:path';
import { report } from '@/server/diagnostics/report';
import { env } from '@/server/env/env';
import { commands } from './commands';

/** A socket's path may hold some 100 bytes only; a longer one goes through a link of /proc to the open folder. */
export function commandSocket(): string {
  return path.join(env().dataDir, 'command.sock');
}

export type CommandAnswer = { ok: true; lines: string[] } | { ok: false; sentence: string };

/**
 * Lets commands of this machine's user run inside the server, which holds the database. Mode 0600: whoever may read the
 * data folder's files may do as much anyway.
 */
export async function serveCommands(): Promise<() => void> {
  const address = commandSocket();
  fs.rmSync(address, { force: true });
  const server = net.createServer({ allowHalfOpen: true }, (socket) => {
    const chunks: Buffer[] = [];
    socket.on('data', (chunk) => chunks.push(chunk));
    socket.on('error', (error) => report('command socket', {}, error));
    socket.on('end', () => {
      void runCommand(Buffer.concat(chunks).toString('utf8')).then((answer) => socket.end(JSON.stringify(answer)));
    });
  });
  const umask = process.umask(0o177);
  try {
    await new Promise<void>((resolve, reject) => {
      server.once('error', reject);
      server.listen(address, resolve);
    });
  } finally {
    process.umask(umask);
  }
  server.unref();
  return () => {
    server.close();
    fs.rmSync(address, { force: true });
  };
}

async function runCommand(text: string): Promise<CommandAnswer> {
  try {
    const { name, args } = JSON.parse(text) as { name: string; args: string[] };
    const command = Object.hasOwn(commands, name) ? commands[name] : undefined;
    if (!command) return { ok: false, sentence: `There is no command ${name}.` };
    return { ok: true, lines: await command(args) };
  } catch (error) {
    return { ok: false, sentence: error instanceof Error ? error.message : String(error) };
  }
}
