import { defineConfig, devices } from '@playwright/test';

/**
 * Whole journeys in Debian's Chromium, on the product as `npm start` brings it up: `npm test -- e2e` starts one with a
 * data folder of its own. Against one that runs already: E2E_URL=http://localhost:3000 E2E_PASSWORD=… npx playwright
 * test -c tests/e2e
 */
export default defineConfig({
  testDir: '.',
  outputDir: '../../test-results',
  workers: 1,
  forbidOnly: Boolean(process.env.CI),
  // A slow machine is no fault of the product: nothing here measures time.
  timeout: 180_000,
  expect: { timeout: 30_000 },
  use: {
    ...devices['Desktop Chrome'],
    baseURL: process.env.E2E_URL,
    locale: 'en-GB',
    timezoneId: 'Europe/London',
    screenshot: 'only-on-failure',
    launchOptions: {
      executablePath: '/usr/bin/chromium',
      args: [
        '--no-sandbox',
        '--disable-background-networking',
        '--disable-component-update',
        '--disable-sync',
        '--no-first-run',
      ],
    },
  },
});
