import AxeBuilder from '@axe-core/playwright';
import type { Locator, Page } from '@playwright/test';
import { expect, islandsReady, test } from '../support/e2e';
import { demoPerson, signInOnFloor } from '../support/e2e-people';
import { picture } from '../support/e2e-picture';
import { seedJob, type SeededJob } from '../support/e2e-seed';
import { expectLargeTargets, expectMainInSight, expectNoScrolling } from '../support/e2e-targets';
import { FloorDriver } from './floor-driver';
import { hold, openOnFloor } from './on-floor';

/*
 * Every sheet over a run and every screen beside it, on the tablet lying and standing: targets for gloves, the
 * main action in sight, and nothing that axe finds in either theme.
 */

const MINUTE = 60_000;
const LYING = { width: 1180, height: 820 };
const STANDING = { width: 820, height: 1180 };

const ines = demoPerson('ines');
const bram = demoPerson('bram');
const supervisor = demoPerson('supervisor');

/** The final fit of the first cap in the order of the loop. */
const firstFinalFit = ({ steps }: SeededJob['plan']) =>
  steps.find(({ id }) => id.startsWith('torque-angle.tighten'))?.id;

interface Wanted {
  /** All of it is on the screen at once. */
  isWhole?: boolean;
  hasMain?: boolean;
}

async function expectGood(page: Page, { isWhole = false, hasMain = false }: Wanted = {}): Promise<void> {
  for (const size of [STANDING, LYING]) {
    await page.setViewportSize(size);
    await expectLargeTargets(page);
    if (hasMain) await expectMainInSight(page);
    if (isWhole) await expectNoScrolling(page);
  }
  for (const theme of ['graphite', 'paper']) {
    await page.evaluate((name) => document.documentElement.setAttribute('data-theme', name), theme);
    const { violations } = await new AxeBuilder({ page }).analyze();
    expect(violations.map(({ id, nodes }) => `${id}: ${nodes[0]?.html ?? ''}`)).toEqual([]);
  }
}

test('every sheet of a run in the middle of a cap', async ({ app, page }) => {
  test.setTimeout(4 * MINUTE);
  const job = await seedJob(app, { until: firstFinalFit, people: [ines, bram] });
  await page.goto('/floor');
  await islandsReady(page);
  await signInOnFloor(page, bram, { tablet: 'Bay 1' });
  await signInOnFloor(page, ines);
  const floor = new FloorDriver(page, picture);
  await openOnFloor(page, job.number);
  await floor.runUntil(({ main }) => main === 'Turned 110°');
  const sheet = page.getByRole('dialog');

  for (const [cell, title, isWhole] of [
    [/list of steps/, 'Steps', false],
    [/open list and deviations/, /what is open/, false],
    [/where the records are/, 'Where the records are', true],
    [/change who is working/, 'Who is working', true],
  ] as const) {
    await test.step(String(title), async () => {
      await page.getByRole('button', { name: cell }).tap();
      await expect(page.getByRole('dialog', { name: title })).toBeVisible();
      await expectGood(page, { isWhole });
      await close(sheet);
    });
  }
  await test.step('the list of steps opens at the present one', async () => {
    await page.getByRole('button', { name: /list of steps/ }).tap();
    await expect(sheet.locator('[aria-current="step"]')).toBeInViewport({ ratio: 1 });
    await close(sheet);
  });
  await test.step('another person, with a PIN and in the middle of a cycle', async () => {
    await page.getByRole('button', { name: /change who is working/ }).tap();
    await sheet.getByRole('button', { name: `${bram.name} takes over` }).tap();
    await expect(sheet.getByRole('group', { name: 'Number keys' })).toBeVisible();
    await expectGood(page, { isWhole: true, hasMain: true });
    await close(sheet, { isLast: false });
    await sheet.getByRole('button', { name: `Sign ${ines.name} out` }).tap();
    // Which job is named first depends on what else stands half done in this workshop.
    await expect(sheet.getByText(/ and \d+B stand half tightened/)).toBeVisible();
    await expect(sheet.getByRole('button', { name: 'Sign out' })).toHaveAttribute('aria-disabled', 'true');
    await expectGood(page, { isWhole: true, hasMain: true });
    await close(sheet, { isLast: false });
    await close(sheet);
  });
  await test.step('problems', async () => {
    // A list, and as long as there are ways out.
    await page.getByRole('button', { name: 'Problem' }).tap();
    await expectGood(page);
    await close(sheet);
  });
  for (const [label, hasMain] of [
    ['Raise a deviation', true],
    ['Take back the last act', false],
    ['Waiting for a part', true],
    ['Not applicable', true],
    ['Done earlier, recorded now', true],
    ['Extra work', true],
    ['Another torque wrench', true],
    ['Another angle gauge', true],
    ['End the job unfinished', true],
  ] as const) {
    await test.step(label, async () => {
      await page.getByRole('button', { name: 'Problem' }).tap();
      await sheet.getByRole('button', { name: label }).tap();
      await expect(sheet.getByRole('button', { name: label })).toHaveCount(0);
      await expectGood(page, { isWhole: true, hasMain });
      await close(sheet);
    });
  }
});

test('the old shells, side by side', async ({ app, page }) => {
  test.setTimeout(4 * MINUTE);
  const { number } = await seedJob(app, {
    until: ({ steps }) => steps.find(({ kind }) => kind === 'grade-shells')?.id,
  });
  await page.goto('/floor');
  await islandsReady(page);
  await signInOnFloor(page, ines, { tablet: 'Bay 3' });
  await openOnFloor(page, number);
  const bench = page.getByRole('group', { name: /^The old shells/ });
  await test.step('before any is graded', async () => {
    await expect(bench.getByRole('button')).toHaveCount(12);
    await expectGood(page, { hasMain: true });
  });
  await test.step('with all grades and signs', async () => {
    await page.getByRole('button', { name: '1 fine lines' }).tap();
    await page.getByRole('button', { name: 'All 12: fine lines' }).tap();
    for (const [patch, shell] of [
      ['3 copper showing', '5U'],
      ['4 material missing', '6U'],
      ['heat', '6U'],
      ['debris', '6U'],
      ['edge loading', '6U'],
      ['pitting', '6U'],
    ] as const) {
      await page.getByRole('button', { name: patch, exact: true }).tap();
      await bench.getByRole('button', { name: new RegExp(`^${shell},`) }).tap();
    }
    await expectGood(page, { hasMain: true });
  });
  await test.step('what they say, over the next screen', async () => {
    await page.getByRole('button', { name: 'Keep the 12 grades' }).tap();
    await expect(page.getByRole('region', { name: 'The old shells just graded' })).toContainText(
      'pins: 5U, 6U.',
    );
    await expectGood(page, { hasMain: true });
  });
  await test.step('looked at again, and corrected', async () => {
    await page.getByRole('button', { name: /list of steps/ }).tap();
    await page
      .getByRole('dialog')
      .getByRole('button', { name: /^Grade the old shells/ })
      .tap();
    await expect(page.getByRole('table', { name: /^Wear of the old shells/ })).toBeVisible();
    await expectGood(page, { hasMain: true });
    await page.getByRole('button', { name: 'Correct', exact: true }).tap();
    await expect(page.getByRole('dialog', { name: 'Correct the grades' })).toBeVisible();
    await expectGood(page, { hasMain: true });
  });
});

test('the screens beside a run', async ({ app, page }) => {
  test.setTimeout(4 * MINUTE);
  const { number } = await seedJob(app, {
    until: ({ steps }) => steps.find(({ kind }) => kind === 'gauge')?.id,
    people: [ines, supervisor],
  });
  const sheet = page.getByRole('dialog');
  await test.step('signing in', async () => {
    await page.goto('/floor');
    await islandsReady(page);
    await expect(page.getByLabel('E-mail', { exact: true })).toBeVisible();
    await expectGood(page, { isWhole: true, hasMain: true });
  });
  await test.step('naming the tablet', async () => {
    await signInOnFloor(page, supervisor);
    await expect(page.getByRole('heading', { name: 'Name this tablet' })).toBeVisible();
    await expectGood(page, { isWhole: true, hasMain: true });
    await page.getByRole('button', { name: 'Bay 2', exact: true }).tap();
    await page.getByRole('button', { name: 'Enrol the tablet' }).tap();
  });
  await test.step('the first screen', async () => {
    await expect(page.getByRole('heading', { name: 'Open jobs' })).toBeVisible();
    await expectGood(page);
    await page.getByRole('button', { name: /^Sign .* out$/ }).tap();
    await expectGood(page, { isWhole: true, hasMain: true });
    await close(sheet);
  });
  await test.step('the sums, and back', async () => {
    await page.getByRole('button', { name: 'Sums' }).tap();
    for (const name of ['Units', 'Adapter', 'Clearance', 'Bolt']) {
      await page.getByRole('button', { name, exact: true }).tap();
      await expectGood(page);
    }
    await page.getByRole('button', { name: /^Back/ }).tap();
    await expect(page.getByRole('heading', { name: 'Open jobs' })).toBeVisible();
  });
  await test.step('taking over, with a PIN', async () => {
    await openOnFloor(page, number);
    await expect(page.getByRole('heading', { name: `Take over from ${ines.name}` })).toBeVisible();
    await expectGood(page, { isWhole: true, hasMain: true });
    for (const digit of supervisor.pin) await page.getByRole('button', { name: digit, exact: true }).tap();
    await hold(page, page.getByRole('button', { name: 'Take the job over' }));
    await expect(page.getByRole('heading', { name: /^Take over/ })).toHaveCount(0);
  });
  await test.step('a deviation is raised and disposed of', async () => {
    await page.getByRole('button', { name: 'Problem' }).tap();
    await sheet.getByRole('button', { name: 'Raise a deviation' }).tap();
    await sheet.getByRole('button', { name: 'crankpin scratched' }).tap();
    await sheet.getByRole('button', { name: 'Raise the deviation' }).tap();
    await expect(sheet).toHaveCount(0);
    await page.getByRole('button', { name: /open list and deviations/ }).tap();
    await sheet.getByRole('button', { name: 'Dispose of it' }).tap();
    await expectGood(page, { isWhole: true, hasMain: true });
    await sheet.getByRole('radio', { name: 'Rework' }).tap({ force: true });
    await sheet.getByRole('textbox').fill('polished by hand');
    await sheet.getByRole('button', { name: 'Dispose of it' }).tap();
    await expect(sheet.getByText(/polished by hand/)).toBeVisible();
    await close(sheet);
  });
  await test.step('made safe and parked', async () => {
    await page.getByRole('button', { name: 'Problem' }).tap();
    await sheet.getByRole('button', { name: 'Make safe and park' }).tap();
    await page.getByRole('button', { name: 'Safe, park the job' }).tap();
    // Work that is behind one is signed for before anything else comes.
    await hold(page, page.getByRole('button', { name: /my work/ }));
    await expect(page.getByRole('button', { name: 'As it was left, resume' })).toBeVisible();
    await expectGood(page, { hasMain: true });
  });
  await test.step('ended unfinished', async () => {
    await page.getByRole('button', { name: 'Problem' }).tap();
    await sheet.getByRole('button', { name: 'End the job unfinished' }).tap();
    await sheet.getByRole('textbox').fill('the vehicle is taken away');
    await hold(page, sheet.getByRole('button', { name: 'End unfinished, not to be run' }));
    await expect(page.getByRole('heading', { name: /ended unfinished: not to be run/ })).toBeVisible();
    await expect(page.getByText('“the vehicle is taken away”')).toBeVisible();
    await expectGood(page, { isWhole: true, hasMain: true });
  });
});

test('a refused record is shown to its author with the reason and what to do next', async ({ app, page }) => {
  const job = await seedJob(app, { until: firstFinalFit, people: [ines, bram] });
  await page.goto('/floor');
  await islandsReady(page);
  await signInOnFloor(page, ines, { tablet: 'Bay 1' });
  await signInOnFloor(page, bram);
  await openOnFloor(page, job.number);
  for (const digit of '000000') await page.getByRole('button', { name: digit, exact: true }).tap();
  await hold(page, page.getByRole('button', { name: 'Take the job over' }));
  const cell = page.getByRole('button', { name: /where the records are/ });
  await expect(cell).toContainText('1 refused');
  await cell.tap();
  const sheet = page.getByRole('dialog');
  await expect(sheet.getByRole('heading', { name: 'Refused, yours: 1' })).toBeVisible();
  await expect(sheet.getByText('The PIN was wrong. Sign again.')).toBeVisible();
  await expect(sheet.getByText('Take the job over again, with the right PIN.')).toBeVisible();
  await expectGood(page);
});

/** Closes the sheet; one that was opened from another gives way to that. */
async function close(sheet: Locator, { isLast = true } = {}): Promise<void> {
  await sheet.getByRole('button', { name: 'Close' }).tap();
  if (isLast) await expect(sheet).toHaveCount(0);
}
