import { readdirSync } from 'node:fs';
import { defineConfig } from '@playwright/test';
import { findBrowser } from '../support/chromium';

const browser = await findBrowser();
const files = readdirSync(import.meta.dirname).filter((file) => file.endsWith('.spec.ts'));

/** Few tests, on the built program, in a real browser the size of the trolley's tablet. */
export default defineConfig({
  testDir: '.',
  outputDir: '../../test-results',
  workers: 1,
  // A worker, and with it a server, for each file: what one file signs in or leaves behind is not there for the next.
  projects: files.map((file) => ({ name: file.replace('.spec.ts', ''), testMatch: file })),
  // A test that passes at its second try has found a fault.
  retries: 0,
  forbidOnly: process.env.CI !== undefined,
  timeout: 60_000,
  reporter: [['list']],
  use: {
    browserName: 'chromium',
    viewport: { width: 1180, height: 820 },
    hasTouch: true,
    actionTimeout: 20_000,
    locale: 'en-GB',
    timezoneId: 'Europe/London',
    trace: 'retain-on-failure',
    launchOptions: {
      executablePath: browser.executablePath,
      args: browser.args,
      env: { ...(process.env as Record<string, string>), ...browser.env },
    },
  },
});
