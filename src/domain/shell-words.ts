/* A choice of shells in plain words, and why a rod does not take the grade next to its own. */
import { findBest, type BestPairs } from './shell-best';
import { fromParts, type ShellProblem } from './shell-problem';
import type { ShellPair } from './shell-search';

/** A grade next to the one that a rod gets in one half, with the clearance that it would give (mm). */
export interface NeighbourGrade {
  half: 'upper' | 'lower';
  grade: string;
  predicted: number;
  /** As "thick would be 0.031, further from 0.048". */
  why: string;
}

const LEAST_PLACES = 3;

/** A length as people say it: at least three places, and no more than it has. */
export function lengthWords(parts: number): string {
  const mm = fromParts(parts);
  const text = String(mm);
  const places = /^-?\d+\.(\d+)$/.exec(text)?.[1]?.length ?? 0;
  return mm.toFixed(Math.min(9, Math.max(LEAST_PLACES, places)));
}

/** What a choice comes to. */
export function choiceWords({ target }: ShellProblem, { worst, spread, changed, pairs }: BestPairs): string {
  const rods = pairs.length === 1 ? 'The rod is' : 'Every rod is';
  const near =
    worst === 0 ? `on ${lengthWords(target)}` : `within ${lengthWords(worst)} of ${lengthWords(target)}`;
  const apart = pairs.length === 1 ? '' : `, ${lengthWords(spread)} apart at most`;
  return `${rods} predicted ${near}${apart}; ${halvesWords(changed)}.`;
}

function halvesWords(changed: number): string {
  if (changed === 0) return 'no shell changes';
  return changed === 1 ? '1 half shell changes' : `${changed} half shells change`;
}

/** Of one rod, each grade next to a chosen one with the reason against it. */
export function whyNotNeighbours(problem: ShellProblem, best: BestPairs, index: number): NeighbourGrade[] {
  const chosen = best.pairs[index];
  const pairs = problem.rods[index]?.pairs ?? [];
  if (chosen === undefined) return [];
  return (['upper', 'lower'] as const).flatMap((half) => {
    const other = half === 'upper' ? 'lower' : 'upper';
    const alike = pairs.filter((pair) => pair[other] === chosen[other]);
    return neighbours(alike, chosen).map((pair): NeighbourGrade => {
      const grade = problem.grades[pair[half]] ?? '';
      const why = `${grade} would be ${lengthWords(pair.predicted)}, ${whyNot(problem, best, index, pair)}`;
      return { half, grade, predicted: fromParts(pair.predicted), why };
    });
  });
}

/** The pairs one step tighter and one step wider than the chosen one. */
function neighbours(pairs: readonly ShellPair[], chosen: ShellPair): ShellPair[] {
  const sorted = pairs.toSorted((a, b) => b.predicted - a.predicted);
  const thinner = sorted.findLast(({ predicted }) => predicted > chosen.predicted);
  const thicker = sorted.find(({ predicted }) => predicted < chosen.predicted);
  return [thinner, thicker].filter((pair) => pair !== undefined);
}

function whyNot(problem: ShellProblem, best: BestPairs, index: number, pair: ShellPair): string {
  const { target, from, to } = problem;
  const chosen = best.pairs[index];
  if (chosen === undefined) return 'and is not chosen';
  if (pair.predicted < from) return `too near the low limit or below it: ${lengthWords(from)} is the least`;
  if (pair.predicted > to) return `too near the high limit or above it: ${lengthWords(to)} is the most`;
  const off = Math.abs(pair.predicted - target);
  const chosenOff = Math.abs(chosen.predicted - target);
  if (off > chosenOff) return `further from ${lengthWords(target)}`;
  return whyNotNearer(problem, best, index, pair, off === chosenOff);
}

/** The rod alone would be no worse off: then the other rods, the stock or a later criterion speak against it. */
function whyNotNearer(
  problem: ShellProblem,
  best: BestPairs,
  index: number,
  pair: ShellPair,
  isAsNear: boolean,
): string {
  const place = isAsNear ? 'as near' : 'nearer';
  const rods = problem.rods.map((rod, at) => (at === index ? { ...rod, pairs: [pair] } : rod));
  const forced = findBest({ ...problem, rods });
  if (forced === null) return `${place}, but then there are not shells enough for all rods`;
  if (forced.worst > best.worst)
    return `${place}, but then another rod would be ${lengthWords(forced.worst)} off, now ${lengthWords(best.worst)} at most`;
  if (forced.spread > best.spread)
    return `${place}, but then the rods would lie ${lengthWords(forced.spread)} apart, now ${lengthWords(best.spread)}`;
  if (forced.changed > best.changed)
    return `${place}, but then ${halvesWords(forced.changed)}, now ${best.changed}`;
  return `${place} and just as good: the lower grades in the order of the sheet come first`;
}
