// Compiles what runs outside Next: worker threads and commands, each on its own, into dist/.
import path from 'node:path';
import fs from 'node:fs';
import { build } from 'esbuild';

const root = path.resolve(import.meta.dirname, '../..');
const workers = fs
  .readdirSync(path.join(root, 'server'), { recursive: true, encoding: 'utf8' })
  .filter((file) => /-worker\.ts$/.test(file))
  .map((file) => path.join(root, 'server', file));

const shared = {
  bundle: true,
  platform: 'node',
  format: 'esm',
  target: 'node20',
  logLevel: 'warning',
  absWorkingDir: root,
  outExtension: { '.js': '.mjs' },
  alias: { '@': root, 'server-only': path.join(root, 'tests/server-only.ts') },
};

await build({
  ...shared,
  packages: 'external',
  entryPoints: [path.join(root, 'server/commands/run.ts')],
  outdir: path.join(root, 'dist/commands'),
});
if (workers.length > 0) {
  await build({
    ...shared,
    packages: 'external',
    entryPoints: workers,
    outdir: path.join(root, 'dist/workers'),
    entryNames: '[name]',
  });
}
