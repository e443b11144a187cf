// Compiles the worker threads on their own into dist/workers: the application's bundler cannot place them.
import { mkdir } from 'node:fs/promises';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { build } from 'esbuild';

const root = path.resolve(path.dirname(fileURLToPath(import.meta.url)), '../..');

export async function buildWorkers() {
  const outdir = path.join(root, 'dist/workers');
  await mkdir(outdir, { recursive: true });
  await build({
    absWorkingDir: root,
    entryPoints: ['server/traces/ingest-worker.ts'],
    outdir,
    outExtension: { '.js': '.mjs' },
    bundle: true,
    platform: 'node',
    target: 'node20',
    format: 'esm',
    minifySyntax: true,
    tsconfig: 'tsconfig.json',
    logLevel: 'warning',
  });
}

if (process.argv[1] === fileURLToPath(import.meta.url)) await buildWorkers();
