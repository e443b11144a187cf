// `npm run token`, `invite`, `maintain`: compiles the commands where that has not been done, then runs one.
import { spawnSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import path from 'node:path';

const root = path.resolve(import.meta.dirname, '../..');
process.chdir(root);
const compiled = path.join(root, 'dist/commands/run.mjs');
if (!existsSync(compiled)) {
  const installed = spawnSync(process.execPath, ['server/commands/start.mjs', '--install-only'], {
    stdio: ['ignore', 2, 2],
  });
  const built = spawnSync(process.execPath, ['server/commands/build.mjs'], { stdio: ['ignore', 2, 2] });
  if (installed.status !== 0 || built.status !== 0) process.exit(1);
}
const result = spawnSync(process.execPath, [compiled, ...process.argv.slice(2)], { stdio: 'inherit' });
process.exit(result.status ?? 1);
