// `npm run bench`: one JSON line per figure; `npm run bench -- recalculation csv` measures only those.
import { prepare, step } from './steps.mjs';

const wanted = process.argv.slice(2);
prepare({ build: wanted.length === 0 || wanted.includes('pages') });
const { build } = await import('esbuild');
// Bundled as the application is: a loader that keeps every function's name would be measured too.
const outfile = 'dist/bench/run.mjs';
await build({
  entryPoints: ['tests/bench/run.ts'],
  outfile,
  bundle: true,
  platform: 'node',
  format: 'esm',
  target: 'node20',
  packages: 'external',
  tsconfig: 'tests/tsconfig.json',
  logLevel: 'warning',
});
process.exit(step('Benches', process.execPath, [outfile, ...wanted], { tolerate: true }) ? 0 : 1);
