/*
 * Which grade of upper and lower shell each rod gets. A thicker wall takes its thickness off the clearance, so
 * predicted = measured − (change of the upper wall + change of the lower wall). The choice is the best there is,
 * exactly: first the smallest worst distance of a predicted clearance from the target, then the smallest spread
 * of the predicted clearances, then the fewest halves changed, then the lowest grades in the order of the list,
 * rod by rod, upper before lower. The shells that are in a rod now stay available to that rod in their own half,
 * beside the stock, and to no other rod.
 */
import { findBest } from './shell-best';
import { whyImpossible } from './shell-impossible';
import { fromParts, readProblem, type ShellChoiceInput, type ShellProblem } from './shell-problem';
import type { ShellPair } from './shell-search';
import { choiceWords, whyNotNeighbours, type NeighbourGrade } from './shell-words';

export type { MeasuredRod, ShellChoiceInput, ShellGrade, ShellsInStock } from './shell-problem';
export type { NeighbourGrade } from './shell-words';

/** What one rod gets, and the clearance to expect (mm). A prediction is never a measurement. */
export interface ShellsForRod {
  rod: number;
  upper: string;
  lower: string;
  predicted: number;
}

/** The best choice, or why there is none. */
export interface ShellChoice {
  possible: boolean;
  /** In the order of the rods asked for; empty where no choice is possible. */
  rods: ShellsForRod[];
  /** In plain words: what the choice comes to, or for which rods none is possible and why. */
  why: string;
}

/** The best grades for all rods together, within the limits guarded by the uncertainty and within the stock. */
export function chooseShells(input: ShellChoiceInput): ShellChoice {
  const problem = readProblem(input);
  const best = findBest(problem);
  if (best === null) return { possible: false, rods: [], why: whyImpossible(problem) };
  return {
    possible: true,
    rods: best.pairs.map((pair, index) => shellsForRod(problem, pair, index)),
    why: choiceWords(problem, best),
  };
}

/** Why a rod takes neither the next thinner nor the next thicker grade in either half; empty where nothing is possible. */
export function explainChoice(input: ShellChoiceInput, rod: number): NeighbourGrade[] {
  const problem = readProblem(input);
  const index = problem.rods.findIndex((one) => one.rod === rod);
  if (index < 0) throw new RangeError(`Rod ${rod} is not among the rods that shells are chosen for.`);
  const best = findBest(problem);
  return best === null ? [] : whyNotNeighbours(problem, best, index);
}

function shellsForRod({ grades, rods }: ShellProblem, pair: ShellPair, index: number): ShellsForRod {
  return {
    rod: rods[index]?.rod ?? 0,
    upper: grades[pair.upper] ?? '',
    lower: grades[pair.lower] ?? '',
    predicted: fromParts(pair.predicted),
  };
}
