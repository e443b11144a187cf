// `npm run check`: types, lint with the import rules, formatting.
import { prepare, step } from './steps.mjs';

prepare();
step('Types', 'npx', ['--no-install', 'next', 'typegen'], { quiet: true });
step('Types', 'npx', ['--no-install', 'tsc', '--noEmit', '-p', '.']);
step('Lint', 'npx', ['--no-install', 'eslint', '.', '--max-warnings', '0']);
step('Formatting', 'npx', ['--no-install', 'prettier', '--check', '--log-level', 'warn', '.']);
process.stdout.write('check: types, lint and formatting are in order\n');
