import net from 'node:net';
import { closeDatabase } from '@/server/db/client';
import { commands } from './commands';
import { commandSocket, type CommandAnswer } from './socket';

/** `node dist/commands/run.mjs NAME ARGS…`: inside the server when it runs, else in this process, which then holds the database. */
async function main(): Promise<number> {
  const [name, ...args] = process.argv.slice(2);
  if (!name || !Object.hasOwn(commands, name)) {
    process.stderr.write(`Commands: ${Object.keys(commands).join(', ')}\n`);
    return 2;
  }
  const answer = (await askServer(name, args)) ?? (await runHere(name, args));
  if (answer.ok) {
    for (const line of answer.lines) process.stdout.write(`${line}\n`);
    return 0;
  }
  process.stderr.write(`${answer.sentence}\n`);
  return 1;
}

/** null when no server answers on the socket. */
function askServer(name: string, args: string[]): Promise<CommandAnswer | null> {
  return new Promise((resolve) => {
    const socket = net.connect(commandSocket());
    const chunks: Buffer[] = [];
    socket.on('connect', () => socket.end(JSON.stringify({ name, args })));
    socket.on('data', (chunk) => chunks.push(chunk));
    socket.on('end', () => resolve(JSON.parse(Buffer.concat(chunks).toString('utf8')) as CommandAnswer));
    // No socket, or one that a killed server left behind: nobody holds the database, so this process may.
    socket.on('error', () => resolve(null));
  });
}

async function runHere(name: string, args: string[]): Promise<CommandAnswer> {
  try {
    return { ok: true, lines: await commands[name](args) };
  } catch (error) {
    return { ok: false, sentence: error instanceof Error ? error.message : String(error) };
  } finally {
    await closeDatabase();
  }
}

process.exit(await main());
