import { defineConfig } from '@playwright/test';

export const port = 3977;

export default defineConfig({
  testDir: 'tests/browser',
  outputDir: 'test-results/browser',
  timeout: 120_000,
  expect: { timeout: 15_000 },
  fullyParallel: false,
  workers: 1,
  retries: 0,
  forbidOnly: true,
  reporter: process.env.PLAYWRIGHT_JSON_OUTPUT_NAME ? [['list'], ['json']] : 'list',
  use: {
    baseURL: `http://localhost:${port}`,
    trace: 'retain-on-failure',
    locale: 'en-GB',
    timezoneId: 'Europe/Oslo',
    launchOptions: {
      executablePath: process.env.CHROMIUM_PATH || '/usr/bin/chromium',
      args: [
        '--no-sandbox',
        '--disable-gpu',
        '--disable-quic',
        '--no-first-run',
        '--disable-background-networking',
        '--disable-component-update',
        '--disable-sync',
      ],
    },
  },
  webServer: {
    // Every run begins with the demonstration notebook as it is loaded first.
    command: `node -e "require('node:fs').rmSync('test-results/data', { recursive: true, force: true })" && node server/commands/start.mjs`,
    url: `http://localhost:${port}/sign-in`,
    timeout: 300_000,
    reuseExistingServer: false,
    stdout: 'pipe',
    gracefulShutdown: { signal: 'SIGTERM', timeout: 20_000 },
    env: { PORT: String(port), BASE_URL: `http://localhost:${port}`, DATA_DIR: 'test-results/data', DEMO: 'on' },
  },
});
