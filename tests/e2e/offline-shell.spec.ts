import { readFile, writeFile } from 'node:fs/promises';
import { expect, islandsReady, test, workerReady } from '../support/e2e';

const WORKER = 'dist/client/sw.js';

test.afterEach(async ({ app }) => {
  await app.restart();
});

test('the Floor opens after the server has died, and any other page says that there is no network', async ({
  app,
  page,
  expectedErrors,
}) => {
  await page.goto('/floor');
  await page.evaluate(() => navigator.serviceWorker.register('/sw.js'));
  await workerReady(page);
  // The browser itself reports every request that finds no server; the Floor asks, and does without an answer.
  expectedErrors.push(/ERR_CONNECTION_REFUSED/);
  await app.kill();

  for (const address of ['/floor', '/floor/', '/floor?job=1']) {
    await page.goto(address);
    await islandsReady(page);
    await expect(page.getByRole('main')).toBeVisible();
  }

  await page.goto('/floor/sums');
  await islandsReady(page);
  for (const digit of ['4', '0']) await page.getByRole('button', { name: digit, exact: true }).tap();
  await expect(page.getByRole('region', { name: 'Answer' })).toContainText('29.502 lbf·ft');

  await page.goto('/jobs');
  await expect(page.getByRole('heading', { name: 'No network' })).toBeVisible();
});

test('a new version waits until it is told that no action is under way', async ({ app, page }) => {
  // A page without the Floor's own code, which would tell the new version to go on: no action is under way.
  await page.goto('/offline');
  await page.evaluate(() => navigator.serviceWorker.register('/sw.js'));
  await workerReady(page);

  const built = await readFile(WORKER, 'utf8');
  try {
    await writeFile(WORKER, `${built}\n// the next version`);
    await app.restart();
    const waiting = await page.evaluate(async () => {
      const registration = await navigator.serviceWorker.ready;
      await registration.update();
      const next = registration.installing ?? registration.waiting;
      await new Promise<void>((resolve) => {
        if (next?.state === 'installed') resolve();
        next?.addEventListener('statechange', () => {
          if (next.state === 'installed') resolve();
        });
      });
      // Two turns of the clock: a worker that takes over by itself would have done so by now.
      await new Promise((resolve) => setTimeout(resolve, 500));
      return { waits: registration.waiting !== null, active: registration.active?.state };
    });
    expect(waiting).toEqual({ waits: true, active: 'activated' });

    const takenOver = await page.evaluate(async () => {
      const registration = await navigator.serviceWorker.ready;
      const changed = new Promise((resolve) =>
        navigator.serviceWorker.addEventListener('controllerchange', resolve, { once: true }),
      );
      registration.waiting?.postMessage({ type: 'SKIP_WAITING' });
      await changed;
      return registration.waiting === null;
    });
    expect(takenOver).toBe(true);
  } finally {
    await writeFile(WORKER, built);
  }
});
