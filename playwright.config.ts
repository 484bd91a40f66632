import { defineConfig } from '@playwright/test';

/** Debian's Chromium; nothing is downloaded. */
const chromium = process.env.CHROMIUM_PATH ?? '/usr/bin/chromium';
const inCi = process.env.CI !== undefined;

/**
 * The browser tests run against a product that is already serving, at BASE_URL. `./docker-free-dev.sh test` starts one with a
 * fresh database; by hand, start `./docker-free-dev.sh` and run `npx playwright test` beside it.
 */
export default defineConfig({
  testDir: 'tests/e2e',
  outputDir: 'test-results/browser',
  // The stories change one shared demo database, so they run in turn.
  workers: 1,
  fullyParallel: false,
  forbidOnly: inCi,
  // A retry would hide a race; a test that fails once has found something.
  retries: 0,
  timeout: 60_000,
  expect: { timeout: 15_000 },
  reporter: [['list'], ['json', { outputFile: 'test-results/playwright.json' }]],
  use: {
    baseURL: process.env.BASE_URL ?? 'http://127.0.0.1:3000',
    locale: 'en-US',
    timezoneId: 'America/Denver',
    screenshot: 'only-on-failure',
    trace: 'retain-on-failure',
    browserName: 'chromium',
    launchOptions: {
      executablePath: chromium,
      args: [
        '--headless',
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
  projects: [
    { name: 'desktop', use: { viewport: { width: 1440, height: 900 } } },
    // The story changes the shared database once; the phone walks its pages after it.
    {
      name: 'phone',
      testIgnore: '**/story.test.ts',
      use: { viewport: { width: 390, height: 844 }, hasTouch: true, isMobile: true },
    },
  ],
});
