import { test as base, expect, type Page } from '@playwright/test';
import { type RunningApp, startApp } from './app';

/** A pattern of console errors that a test means to cause. */
type ExpectedErrors = RegExp[];

interface TestFixtures {
  /** Console errors that this test expects: push a pattern before causing one. */
  expectedErrors: ExpectedErrors;
}

interface WorkerFixtures {
  /** The built program on a data folder of its own, shared by the tests of one file. */
  app: RunningApp;
}

/**
 * Playwright's test with the built program behind it. A console error, or an exception in a page, that the
 * test did not announce fails it, whichever page of the context it happens in.
 */
export const test = base.extend<TestFixtures, WorkerFixtures>({
  app: [
    async ({}, use) => {
      const app = await startApp();
      await use(app);
      await app.dispose();
    },
    { scope: 'worker' },
  ],
  baseURL: async ({ app }, use) => {
    await use(app.url);
  },
  expectedErrors: async ({}, use) => {
    await use([]);
  },
  context: async ({ context, expectedErrors }, use) => {
    const seen: string[] = [];
    context.on('console', (message) => {
      if (message.type() === 'error') seen.push(`${message.text()} (${message.location().url})`);
    });
    context.on('weberror', (error) => seen.push(error.error().stack ?? error.error().message));
    await use(context);
    const unexpected = seen.filter((text) => !expectedErrors.some((pattern) => pattern.test(text)));
    expect(unexpected, 'unexpected console errors').toEqual([]);
  },
});

export { expect };

/** Waits until every island of a page answers to touch. */
export async function islandsReady(page: Page): Promise<void> {
  await expect(page.locator('astro-island[ssr]')).toHaveCount(0);
}

/** Waits until the service worker answers for a page. */
export async function workerReady(page: Page): Promise<void> {
  await page.waitForFunction(() => navigator.serviceWorker.controller?.state === 'activated');
}
