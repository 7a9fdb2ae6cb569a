/*
 * The best choice of shells, criterion by criterion. Each criterion asks one question of the search: is there a
 * fit with every predicted clearance between two values and at most so many halves changed?
 */
import type { ShellProblem } from './shell-problem';
import { searchOver, type FirstFit, type ShellPair } from './shell-search';

/** A choice with what it is judged by; lengths in whole parts. */
export interface BestPairs {
  /** One a rod, in the order of the rods. */
  pairs: ShellPair[];
  worst: number;
  spread: number;
  changed: number;
}

/** The pairs that each rod may take. */
type Window = readonly (readonly ShellPair[])[];

/** The best of all choices; null where limits and stock leave none. */
export function findBest({ rods, stock, target, from, to }: ShellProblem): BestPairs | null {
  const search = searchOver(stock);
  const allowed = between(
    rods.map(({ pairs }) => pairs),
    from,
    to,
  );
  const worst = leastWorst(allowed, target, search);
  if (worst === null) return null;
  const near = between(allowed, target - worst, target + worst);
  const { spread, windows } = narrowest(near, search);
  const changed = fewestChanged(windows, search);
  const fits = windows.flatMap((window) => {
    const fit = search(window, changed);
    return fit === null ? [] : [fit];
  });
  const [pairs] = fits.toSorted(inGradeOrder);
  if (pairs === undefined) throw new RangeError('A choice that was found is lost.');
  return { pairs, worst, spread, changed };
}

/** The smallest distance from the target within which every rod can be; null where none is in the limits. */
function leastWorst(allowed: Window, target: number, search: FirstFit): number | null {
  const off = (pair: ShellPair): number => Math.abs(pair.predicted - target);
  const within = (most: number): Window => allowed.map((pairs) => pairs.filter((pair) => off(pair) <= most));
  const distances = distinct(allowed.flat().map(off));
  const nearest = Math.max(...allowed.map((pairs) => Math.min(...pairs.map(off))));
  let low = distances.indexOf(nearest);
  let high = distances.length - 1;
  if (low < 0 || fitAnyhow(allowed, search) === null) return null;
  while (low < high) {
    const middle = Math.floor((low + high) / 2);
    const fit = fitAnyhow(within(distances[middle] ?? 0), search);
    if (fit === null) low = middle + 1;
    else high = distances.indexOf(Math.max(...fit.map(off)));
  }
  return distances[high] ?? null;
}

/** The smallest spread of predicted clearances, and all windows of just that width in which there is a fit. */
function narrowest(near: Window, search: FirstFit): { spread: number; windows: Window[] } {
  const values = distinct(near.flat().map(({ predicted }) => predicted));
  const starts = values.map((from) => ({ from, least: leastWidth(near, from) }));
  let spread = spreadOf(fitAnyhow(near, search) ?? []);
  for (const { from, least } of starts) {
    while (least < spread) {
      const fit = fitAnyhow(between(near, from, below(values, from + spread)), search);
      if (fit === null) break;
      spread = spreadOf(fit);
    }
  }
  const windows = starts
    .filter(({ least }) => least <= spread)
    .map(({ from }) => between(near, from, from + spread))
    .filter((window) => fitAnyhow(window, search) !== null);
  return { spread, windows };
}

/** How far from a clearance on every rod has a pair, if the stock were no matter. */
function leastWidth(near: Window, from: number): number {
  let width = 0;
  for (const pairs of near) {
    let nearest = Number.POSITIVE_INFINITY;
    for (const { predicted } of pairs) if (predicted >= from && predicted < nearest) nearest = predicted;
    width = Math.max(width, nearest - from);
  }
  return width;
}

function below(values: readonly number[], bound: number): number {
  return values.findLast((value) => value < bound) ?? Number.NEGATIVE_INFINITY;
}

/** The fewest halves changed in any of these windows. */
function fewestChanged(windows: readonly Window[], search: FirstFit): number {
  let fewest = Number.POSITIVE_INFINITY;
  for (const window of windows) {
    for (;;) {
      const fit = search(
        hardestFirst(window).map(leastChangedFirst),
        Math.min(fewest - 1, 2 * window.length),
      );
      if (fit === null) break;
      fewest = fit.reduce((sum, { changed }) => sum + changed, 0);
    }
  }
  return fewest;
}

function leastChangedFirst(pairs: readonly ShellPair[]): ShellPair[] {
  return pairs.toSorted((a, b) => a.changed - b.changed);
}

/** Whether there is a fit at all, in whatever order of the rods. */
function fitAnyhow(window: Window, search: FirstFit): ShellPair[] | null {
  if (window.some((pairs) => pairs.length === 0)) return null;
  return search(hardestFirst(window), 2 * window.length);
}

/** The rods with the least choice first, so that a dead end shows early, and those with alike choices together. */
function hardestFirst(window: Window): Window {
  const key = (pairs: readonly ShellPair[]): number =>
    pairs.reduce((sum, { upper, lower }) => sum * 7 + upper * 3 + lower, pairs.length) % 1e6;
  return window
    .map((pairs) => ({ pairs, key: key(pairs) }))
    .toSorted((a, b) => a.pairs.length - b.pairs.length || a.key - b.key)
    .map(({ pairs }) => pairs);
}

function between(rods: Window, from: number, to: number): Window {
  return rods.map((pairs) => pairs.filter(({ predicted }) => predicted >= from && predicted <= to));
}

function spreadOf(fit: readonly ShellPair[]): number {
  const predicted = fit.map((pair) => pair.predicted);
  return Math.max(...predicted) - Math.min(...predicted);
}

function inGradeOrder(one: readonly ShellPair[], other: readonly ShellPair[]): number {
  for (const [index, a] of one.entries()) {
    const b = other[index];
    const order = b === undefined ? 0 : a.upper - b.upper || a.lower - b.lower;
    if (order !== 0) return order;
  }
  return 0;
}

function distinct(values: readonly number[]): number[] {
  return [...new Set(values)].sort((a, b) => a - b);
}
