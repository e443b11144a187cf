import boundaries from 'eslint-plugin-boundaries';
import importX from 'eslint-plugin-import-x';
import nextCoreWebVitals from 'eslint-config-next/core-web-vitals';
import { createTypeScriptImportResolver } from 'eslint-import-resolver-typescript';
import tseslint from 'typescript-eslint';

/** Server folders that every noun stands on. */
const foundation = ['access', 'auth', 'clock', 'diagnostics', 'digest', 'env', 'log', 'mail', 'people'];

const elements = [
  { type: 'lib', pattern: 'lib/*', capture: ['subject'] },
  { type: 'components', pattern: 'components/*', capture: ['noun'] },
  { type: 'db', pattern: 'server/db' },
  { type: 'foundation', pattern: `server/(${foundation.join('|')})`, capture: ['noun'] },
  { type: 'noun', pattern: 'server/*', capture: ['noun'] },
  { type: 'fakes', pattern: 'fakes/*', capture: ['name'] },
  { type: 'tests', pattern: 'tests/*', capture: ['layer'] },
  { type: 'app', pattern: 'app' },
];

const to = (...types) => ({ to: { element: { types: { anyOf: types } } } });
const external = { to: { module: { origin: 'external' } } };
const node = { to: { module: { origin: 'core' } } };

/** Packages without React, Next, Node or a database, which lib may use. */
const purePackages = ['zod', 'mathjs', 'canonicalize', 'diff', 'katex', '@tiptap/*', '@noble/hashes'];

const policies = [
  { from: { element: { type: 'lib' } }, allow: to('lib') },
  { from: { element: { type: 'lib' } }, allow: { to: { module: { origin: 'external', source: purePackages } } } },
  { from: { element: { type: 'components' } }, allow: to('components', 'lib') },
  { from: { element: { type: 'components' } }, allow: external },
  { from: { element: { type: 'db' } }, allow: to('db', 'lib') },
  { from: { element: { type: 'db' } }, allow: { to: { element: { type: 'foundation', captured: { noun: 'env' } } } } },
  { from: { element: { types: { anyOf: ['db', 'foundation', 'noun', 'fakes', 'tests', 'app'] } } }, allow: external },
  { from: { element: { types: { anyOf: ['db', 'foundation', 'noun', 'fakes', 'tests'] } } }, allow: node },
  // Tests beside the code.
  { from: { file: { categories: 'test' } }, allow: external },
  { from: { file: { categories: 'test' } }, allow: node },
  { from: { file: { categories: 'test' } }, allow: to('lib', 'components') },
  { from: { element: { types: { anyOf: ['foundation', 'noun'] } } }, allow: to('lib', 'db', 'foundation') },
  {
    from: { element: { types: { anyOf: ['foundation', 'noun'] } } },
    allow: { to: { element: { type: 'noun' }, file: { categories: 'service' } } },
  },
  {
    from: { element: { type: 'noun' } },
    allow: { to: { element: { type: 'noun', captured: { noun: '{{ from.element.captured.noun }}' } } } },
  },
  {
    from: { element: { type: 'foundation', captured: { noun: 'mail' } } },
    allow: { to: { element: { type: 'fakes', captured: { name: 'mailbox' } } } },
  },
  { from: { element: { type: 'app' } }, allow: to('app', 'components', 'lib', 'foundation') },
  { from: { element: { type: 'app' } }, allow: { to: { element: { type: 'noun' }, file: { categories: 'service' } } } },
  { from: { element: { type: 'app' } }, disallow: { to: { file: { categories: 'queries' } } } },
  { from: { element: { type: 'app' }, file: { categories: 'upload-route' } }, allow: to('fakes') },
  { from: { element: { type: 'fakes' } }, allow: to('fakes', 'lib') },
  {
    from: { element: { type: 'tests' } },
    allow: to('lib', 'components', 'db', 'foundation', 'noun', 'fakes', 'app', 'tests'),
  },
];

export default [
  { ignores: ['node_modules', '.next', 'dist', 'data', 'next-env.d.ts', 'test-results', 'drizzle/**'] },
  ...nextCoreWebVitals,
  ...tseslint.configs.recommended.map((config) => ({ ...config, files: ['**/*.ts', '**/*.tsx'] })),
  {
    files: ['**/*.{ts,tsx,mjs,js}'],
    plugins: { boundaries, 'import-x': importX },
    settings: {
      'boundaries/elements': elements,
      'boundaries/files': [
        { category: 'service', pattern: '**/*service.ts' },
        { category: 'queries', pattern: '**/queries.ts' },
        { category: 'upload-route', pattern: 'app/api/local-uploads/**' },
        { category: 'test', pattern: '**/*.test.{ts,tsx}' },
      ],
      'boundaries/ignore': [
        '*.{ts,js,mjs}',
        'instrumentation.ts',
        'proxy.ts',
        'server/commands/*',
        'server/start/*',
        'tests/*.ts',
        '**/*.css',
      ],
      'import-x/resolver-next': [createTypeScriptImportResolver()],
      'import/resolver': { typescript: true },
    },
    rules: {
      'boundaries/dependencies': ['error', { default: 'disallow', checkAllOrigins: true, policies }],
      'boundaries/no-unknown-files': 'error',
      'import-x/no-cycle': ['error', { maxDepth: 8 }],
      'no-restricted-imports': [
        'error',
        { patterns: [{ regex: '/index$', message: 'No barrels: import the file itself.' }] },
      ],
    },
  },
  {
    rules: {
      // The React Compiler is not used here, so what it could not optimise is no fault.
      'react-hooks/preserve-manual-memoization': 'off',
      'react-hooks/incompatible-library': 'off',
      // Subscriptions to stores outside React (IndexedDB, clocks, the document's theme) begin in effects.
      'react-hooks/set-state-in-effect': 'off',
      'react-hooks/refs': 'off',
      // Leaving for another page after signing in, out or storing is to load everything anew.
      '@next/next/no-location-assign-relative-destination': 'off',
      'import/no-anonymous-default-export': 'off',
    },
  },
  {
    files: ['**/*.{ts,tsx}'],
    ignores: ['server/env/**', 'tests/**', 'proxy.ts', 'instrumentation.ts', '*.config.ts'],
    rules: {
      'no-restricted-properties': [
        'error',
        { object: 'process', property: 'env', message: 'server/env is the only reader of the environment.' },
      ],
    },
  },
];
