import type { Page } from '@playwright/test';
import { expect, islandsReady, test } from '../support/e2e';
import { demoPerson, signInOnFloor } from '../support/e2e-people';
import { picture } from '../support/e2e-picture';
import { seedJob } from '../support/e2e-seed';
import { FloorDriver } from './floor-driver';
import { openOnFloor } from './on-floor';

/*
 * A gloved finger finds every target of the screens that are used most: none is smaller than 72 px either way,
 * none is nearer than 12 px to its neighbour, and the main action is at least 96 px high.
 */

const SMALLEST = 72;
const NEAREST = 12;
const MAIN_HEIGHT = 96;
/** Half a device pixel, which layout may round away. */
const ROUNDING = 0.5;

interface Target {
  name: string;
  isMain: boolean;
  left: number;
  top: number;
  right: number;
  bottom: number;
}

test('the tightening, the gauge and the list of steps have targets for gloves', async ({ app, page }) => {
  const job = await seedJob(app, {
    until: ({ steps }) => steps.find(({ kind }) => kind === 'gauge')?.id,
  });
  await page.goto('/floor');
  await islandsReady(page);
  await signInOnFloor(page, demoPerson('ines'), { tablet: 'Bay 1' });
  const floor = new FloorDriver(page, picture);
  await openOnFloor(page, job.number);

  await test.step('gauge, before a band was touched', async () => {
    await floor.runUntil(({ words }) => words.startsWith('touch a band'));
    await expectLargeTargets(page);
  });
  await test.step('gauge, kept', async () => {
    await floor.runUntil(({ main }) => main === 'Next: rear');
    await expectLargeTargets(page);
  });
  await test.step('the list of steps', async () => {
    await page.getByRole('button', { name: /list of steps/ }).tap();
    await expect(page.getByRole('dialog', { name: 'Steps' })).toBeVisible();
    await expectLargeTargets(page);
    await page.getByRole('dialog').getByRole('button', { name: 'Close' }).tap();
  });
  await test.step('tightening: choosing the tool, and a pass', async () => {
    await floor.runUntil(({ main }) => main === 'Choose the torque wrench');
    await expectLargeTargets(page);
    await floor.runUntil(({ main }) => main === 'Tightened to 8 N·m');
    await expectLargeTargets(page);
  });
});

async function expectLargeTargets(page: Page): Promise<void> {
  const targets = await page.evaluate(findTargets);
  expect(targets.length, 'targets on the screen').toBeGreaterThan(3);
  const small = targets.filter(
    ({ left, right, top, bottom }) => Math.min(right - left, bottom - top) < SMALLEST - ROUNDING,
  );
  expect(small.map(told), `narrower or lower than ${SMALLEST} px`).toEqual([]);
  const flat = targets.filter(({ isMain, top, bottom }) => isMain && bottom - top < MAIN_HEIGHT - ROUNDING);
  expect(flat.map(told), `a main action lower than ${MAIN_HEIGHT} px`).toEqual([]);
  const near = targets.flatMap((one, index) =>
    targets.slice(index + 1).flatMap((other) => {
      const gap = gapBetween(one, other);
      return gap < NEAREST - ROUNDING ? [`${told(one)} and ${told(other)}: ${gap.toFixed(1)} px`] : [];
    }),
  );
  expect(near, `nearer to each other than ${NEAREST} px`).toEqual([]);
}

/** How far two targets lie apart in the direction in which they lie apart most. */
function gapBetween(a: Target, b: Target): number {
  const across = Math.max(a.left - b.right, b.left - a.right);
  const down = Math.max(a.top - b.bottom, b.top - a.bottom);
  return Math.max(across, down);
}

function told({ name, left, right, top, bottom }: Target): string {
  return `${name} (${(right - left).toFixed(0)} × ${(bottom - top).toFixed(0)})`;
}

/** Everything on the screen that a touch reaches; of what lies under a sheet, nothing. */
function findTargets(): Target[] {
  const root = document.querySelector('dialog[open]') ?? document.body;
  const elements = [
    ...root.querySelectorAll('button:not(:disabled), a[href], label.choice, input:not(.choice input)'),
  ];
  return elements.flatMap((element) => {
    const { left, right, top, bottom, width, height } = element.getBoundingClientRect();
    const isSeen = element.checkVisibility({ visibilityProperty: true, opacityProperty: true });
    const isUnseen = element.closest('.unseen') !== null;
    if (!isSeen || isUnseen || width === 0 || height === 0) return [];
    const name = (element.getAttribute('aria-label') ?? element.textContent).trim().slice(0, 60);
    return [{ name, isMain: element.classList.contains('main-action'), left, right, top, bottom }];
  });
}
