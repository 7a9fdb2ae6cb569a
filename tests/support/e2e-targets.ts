import type { Page } from '@playwright/test';
import { expect } from './e2e';

/*
 * A gloved finger finds every target: none is smaller than 72 px either way, none is nearer than 12 px to its
 * neighbour, and the main action is at least 96 px high.
 */

const SMALLEST = 72;
const NEAREST = 12;
const MAIN_HEIGHT = 96;
/** Half a device pixel, which layout may round away. */
const ROUNDING = 0.5;

interface Box {
  left: number;
  top: number;
  right: number;
  bottom: number;
}

interface Target extends Box {
  name: string;
  isMain: boolean;
  /** Which part of the screen it scrolls with; targets of one part keep their distance wherever that stands. */
  scroller: number;
  /** What of it shows just now. */
  shown: Box | null;
}

/** Measures every target that can be touched on the screen, or in the sheet over it. */
export async function expectLargeTargets(page: Page): Promise<void> {
  const targets = await page.evaluate(findTargets);
  expect(targets.length, 'targets on the screen').toBeGreaterThan(1);
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

/** The main action of the screen or of the sheet over it lies on the screen, wherever the rest is scrolled to. */
export async function expectMainInSight(page: Page): Promise<void> {
  const main = page
    .locator('dialog[open], .floor:not(:has(~ dialog[open]))')
    .last()
    .locator('.main-action, .hold-button[data-size="main"]');
  await expect(main.last()).toBeInViewport({ ratio: 1 });
}

/** Nothing of the screen, or of the sheet over it, has to be scrolled to. */
export async function expectNoScrolling(page: Page): Promise<void> {
  const hidden = await page.evaluate(() => {
    const root = document.querySelector('dialog[open]') ?? document.body;
    return [...root.querySelectorAll('.dialog-body, .floor-main')].map(
      ({ scrollHeight, clientHeight }) => scrollHeight - clientHeight,
    );
  });
  expect(hidden.length).toBeGreaterThan(0);
  expect(Math.max(...hidden), 'px to be scrolled').toBeLessThanOrEqual(1);
}

/** How far two targets lie apart in the direction in which they lie apart most. */
function gapBetween(a: Target, b: Target): number {
  const [one, other] = a.scroller === b.scroller ? [a, b] : [a.shown, b.shown];
  if (!one || !other) return Infinity;
  const across = Math.max(one.left - other.right, other.left - one.right);
  const down = Math.max(one.top - other.bottom, other.top - one.bottom);
  return Math.max(across, down);
}

function told({ name, left, right, top, bottom }: Target): string {
  return `${name} (${(right - left).toFixed(0)} × ${(bottom - top).toFixed(0)})`;
}

/** Everything that a touch reaches; of what lies under a sheet, nothing. */
function findTargets(): Target[] {
  const root = document.querySelector('dialog[open]') ?? document.body;
  const scrollers = [...root.querySelectorAll('.dialog-body, .floor-main, .floor-side')];
  const elements = [
    ...root.querySelectorAll(
      'button:not(:disabled), a[href], label.choice, textarea, input:not(.choice input)',
    ),
  ];
  return elements.flatMap((element) => {
    const { left, right, top, bottom, width, height } = element.getBoundingClientRect();
    const isSeen = element.checkVisibility({ visibilityProperty: true, opacityProperty: true });
    const isUnseen = element.closest('.unseen') !== null;
    if (!isSeen || isUnseen || width === 0 || height === 0) return [];
    const name = (element.getAttribute('aria-label') ?? element.textContent).trim().slice(0, 60);
    const scroller = scrollers.findIndex((one) => one.contains(element));
    const box = scrollers[scroller]?.getBoundingClientRect();
    const shown = {
      left,
      right,
      top: Math.max(top, box?.top ?? top),
      bottom: Math.min(bottom, box?.bottom ?? bottom),
    };
    return [
      {
        ...{ name, isMain: element.classList.contains('main-action'), left, right, top, bottom, scroller },
        shown: shown.bottom > shown.top ? shown : null,
      },
    ];
  });
}
