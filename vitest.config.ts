import path from 'node:path';
import react from '@vitejs/plugin-react';
import { defineConfig } from 'vitest/config';

const alias = {
  '@': path.resolve(import.meta.dirname),
  // The package throws outside a bundler that knows server components; tests stand outside.
  'server-only': path.resolve(import.meta.dirname, 'tests/server-only.ts'),
};

export default defineConfig({
  plugins: [react()],
  resolve: { alias },
  test: {
    projects: [
      {
        extends: true,
        test: {
          name: 'unit',
          include: ['lib/**/*.test.ts', 'server/**/*.test.ts', 'tests/{reference,architecture,standards}/**/*.test.ts'],
          environment: 'node',
          testTimeout: 30_000,
        },
      },
      {
        extends: true,
        test: {
          name: 'components',
          include: ['components/**/*.test.tsx', 'components/**/*.test.ts'],
          environment: 'jsdom',
          testTimeout: 30_000,
        },
      },
      {
        extends: true,
        test: {
          name: 'services',
          include: ['tests/{integration,attacks,faults}/**/*.test.ts'],
          globalSetup: ['tests/integration/template.ts'],
          environment: 'node',
          testTimeout: 400_000,
          hookTimeout: 400_000,
        },
      },
    ],
    maxWorkers: 2,
  },
});
