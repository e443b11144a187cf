// Shared by the commands that check and test: installing, building, running a step.
import { spawnSync } from 'node:child_process';
import path from 'node:path';

const root = path.resolve(import.meta.dirname, '../..');

/** Installs what is missing, and with `build` builds too; through the start command, which knows how. */
export function prepare({ build = false } = {}) {
  process.chdir(root);
  const result = spawnSync(process.execPath, ['server/commands/start.mjs', build ? '--build-only' : '--install-only'], {
    stdio: 'inherit',
  });
  if (result.status !== 0) process.exit(result.status ?? 1);
}

/** Runs one step; a failing one ends the command, unless `tolerate` leaves that to the caller. */
export function step(name, command, args, { quiet = false, tolerate = false, env = {} } = {}) {
  const result = spawnSync(command, args, { stdio: quiet ? 'ignore' : 'inherit', env: { ...process.env, ...env } });
  if (result.status !== 0 && !tolerate) {
    process.stderr.write(`${name}: failed\n`);
    process.exit(1);
  }
  return result.status === 0;
}
