import AxeBuilder from '@axe-core/playwright';
import type { Locator, Page } from '@playwright/test';
import { expect, islandsReady, test } from '../support/e2e';
import { demoPerson, signInAtDesk, signInOnFloor } from '../support/e2e-people';
import { picture } from '../support/e2e-picture';
import { seedJob, type SeededJob } from '../support/e2e-seed';
import { readTrail } from '../support/e2e-trail';
import { FloorDriver } from './floor-driver';
import { openOnFloor } from './on-floor';

const THEMES = ['paper', 'graphite'] as const;

let job: SeededJob;

test.beforeAll(async ({ app }) => {
  job = await seedJob(app, {
    until: ({ steps }) => steps.find(({ id }) => id.startsWith('torque-angle.tighten'))?.id,
  });
});

test('the trail is read in words and checked by the browser that shows it', async ({ app, page }) => {
  await signInAtDesk(page, demoPerson('auditor'));
  await page.goto(`/jobs/${job.id}/trail`);
  const rows = readTrail(app, job.id);
  await expect(page.getByRole('status')).toContainText(`Unbroken from entry 1 to ${rows.length}`);
  const ledger = page.getByRole('table', { name: 'The entries of this job in order' });
  await expect(ledger.getByRole('button', { name: /^Entry \d+$/ })).toHaveCount(rows.length);
  const line = (words: string) => ledger.getByRole('row').filter({ hasText: words });
  await expect(line('Rod 3: cap off square').first()).toContainText('Ines Varga');
  await expect(line('38 N·m').first()).toContainText('confirmed');
  await expect(page.getByRole('heading', { level: 1 })).toContainText(
    `entry ${rows.length} of ${rows.length}`,
  );

  await page.getByRole('button', { name: 'Entry 2', exact: true }).click();
  await expect(page.getByRole('region', { name: 'The job as it stood at entry 2' })).toBeVisible();
});

test('the job page tells progress, what blocks, and who works on it', async ({ page }) => {
  await signInAtDesk(page, demoPerson('supervisor'));
  await expect(page.getByRole('table')).toContainText(job.number);
  await page.getByRole('link', { name: job.number, exact: true }).click();
  await islandsReady(page);
  await expect(page.getByRole('heading', { level: 1 })).toContainText(`Job ${job.number}, KV 63 TRB`);
  const progress = page.getByRole('region', { name: 'Progress' });
  await expect(progress.getByRole('listitem').filter({ hasText: 'Measurement' })).toContainText('48 of 48');
  await expect(page.getByText('Nothing blocks it.')).toBeVisible();
  await expect(page.getByRole('listitem').filter({ hasText: 'Rod 3: final fit' })).toBeVisible();
  await expect(page.getByRole('definition').filter({ hasText: /^Ines Varga since/ })).toBeVisible();
  await expect(page.getByRole('heading', { name: 'Oil clearance' })).toBeVisible();
  await expect(page.getByText('Jorunn Falkmere')).toBeVisible();
  await expect(page.getByRole('link', { name: 'Run on the Floor' })).toBeVisible();
});

test('an auditor reads everything and changes nothing', async ({ page }) => {
  await signInAtDesk(page, demoPerson('auditor'));
  await expect(page.getByRole('link', { name: 'Open a job' })).toHaveCount(0);
  await page.goto(`/jobs/${job.id}`);
  await expect(page.getByRole('heading', { level: 1 })).toContainText(`Job ${job.number}`);
  await expect(page.getByRole('link', { name: 'Read the trail' })).toBeVisible();
  await expect(page.getByRole('link', { name: 'Run on the Floor' })).toHaveCount(0);
  await expect(page.getByRole('button', { name: 'Change who is on it' })).toHaveCount(0);
  await page.goto('/jobs/new');
  await expect(page).toHaveURL(/\/jobs$/);

  const writes = [
    ['/api/jobs/prepare', { route: 'merrow-s6-rod-bearings', options: {} }],
    [`/api/jobs/${job.id}/people`, { people: [] }],
  ] as const;
  for (const [address, data] of writes) {
    const answer = await page.request.post(address, { data });
    expect(answer.status(), address).toBe(403);
  }
  expect((await page.request.get(`/api/jobs/${job.id}/export`)).status()).toBe(200);
});

test('a sign-in that fails says why and what to do', async ({ page, expectedErrors }) => {
  expectedErrors.push(/status of 401/);
  await page.goto('/sign-in');
  await islandsReady(page);
  await page.getByRole('button', { name: 'Sign in' }).tap();
  await expect(page.getByText('Type your e-mail address.')).toBeVisible();
  await expect(page.getByText('Type your password.')).toBeVisible();
  await page.getByLabel('E-mail address').fill('nobody@witnessmark.example');
  await page.getByLabel('Password').fill('not the password');
  await page.getByRole('button', { name: 'Sign in' }).tap();
  await expect(page.getByRole('alert')).toContainText('do not go together. Try again');
  await expect(page.getByLabel('E-mail address')).toHaveValue('nobody@witnessmark.example');
});

for (const theme of THEMES) {
  test(`nothing in the ${theme} theme stands in the way of a screen reader or weak eyes`, async ({
    page,
  }) => {
    test.slow();
    await page.addInitScript((chosen) => localStorage.setItem('witnessmark.theme', chosen), theme);
    await page.goto('/sign-in');
    await islandsReady(page);
    await expectAccessible(page, 'sign-in');
    await signInAtDesk(page, demoPerson('supervisor'));
    const pages = [
      ['/jobs', page.getByRole('table')],
      ['/jobs/new', page.getByRole('button', { name: 'Open the job' })],
      [`/jobs/${job.id}`, page.getByRole('region', { name: 'Progress' })],
      [`/jobs/${job.id}/trail`, page.getByText(/^Unbroken/)],
      ['/tools', page.getByRole('table', { name: 'The tools of the workshop' })],
      [await addressOfTool(page), page.getByRole('heading', { name: 'Enter a calibration' })],
    ] as const;
    await expectAllAccessible(page, pages);
    await page.goto('/floor');
    await islandsReady(page);
    await signInOnFloor(page, demoPerson('ines'));
    await expectAccessible(page, 'the Floor, first screen');
    await openOnFloor(page, job.number);
    const floor = new FloorDriver(page, picture);
    await floor.runUntil(({ main }) => main === 'Both at 8, then 25 N·m');
    await expectAccessible(page, 'the Floor, tightening');
  });
}

for (const theme of THEMES) {
  test(`nor does anything on the owner’s pages in the ${theme} theme`, async ({ page }) => {
    await page.addInitScript((chosen) => localStorage.setItem('witnessmark.theme', chosen), theme);
    await signInAtDesk(page, demoPerson('owner'));
    await expectAllAccessible(page, [
      ['/people', page.getByRole('table', { name: 'The people of the workshop' })],
      ['/workshop', page.getByText(/^Unbroken/)],
      ['/workshop/tablets', page.getByRole('radio', { name: 'SI alone' })],
      ['/workshop/mail', page.getByRole('heading', { name: 'Witness address' })],
    ]);
  });
}

async function expectAllAccessible(
  page: Page,
  pages: readonly (readonly [string, Locator])[],
): Promise<void> {
  for (const [address, shown] of pages) {
    await page.goto(address);
    await expect(shown).toBeVisible();
    await expectAccessible(page, address);
  }
}

/** The page of a tool that has been calibrated. */
async function addressOfTool(page: Page): Promise<string> {
  const answer = await page.request.get('/api/tools');
  const { tools } = (await answer.json()) as { tools: { id: string; kind: string }[] };
  return `/tools/${tools.find(({ kind }) => kind === 'torque wrench')?.id ?? ''}`;
}

async function expectAccessible(page: Page, where: string): Promise<void> {
  const { violations } = await new AxeBuilder({ page }).analyze();
  const told = violations.map(({ id, help, nodes }) => ({
    rule: `${id}: ${help}`,
    at: nodes.map(({ target }) => target.join(' ')),
  }));
  expect(told, where).toEqual([]);
}
