/* For which rods no shells can be chosen, and why, in plain words. */
import { lengthWords } from './shell-words';
import type { RodPairs, ShellProblem } from './shell-problem';
import { searchOver, type ShellPair } from './shell-search';

/** Why no choice is possible: each rod that can't be served by itself, else the rods that can't be served together. */
export function whyImpossible(problem: ShellProblem): string {
  const { from, to } = problem;
  if (from > to) return 'For no rod: the uncertainty leaves nothing between the limits.';
  const band = `${lengthWords(from)} and ${lengthWords(to)}`;
  const alone = problem.rods.flatMap((rod) => whyNotAlone(problem, rod, band) ?? []);
  return alone.length > 0 ? alone.join(' ') : whyNotTogether(problem, band);
}

function whyNotAlone(problem: ShellProblem, rod: RodPairs, band: string): string | undefined {
  const inside = rod.pairs.filter((pair) => isInside(problem, pair));
  if (inside.length === 0)
    return `Rod ${rod.rod}: no grades bring it between ${band}; ${nearestWords(problem, rod)}.`;
  const search = searchOver(problem.stock);
  if (search([inside], 2) !== null) return undefined;
  const [first] = inside.toSorted((a, b) => a.changed - b.changed);
  const needed = first === undefined ? '' : `, such as ${pairWords(problem, first)}`;
  return `Rod ${rod.rod}: what would bring it between ${band}${needed}, is not in stock.`;
}

function isInside({ from, to }: ShellProblem, { predicted }: ShellPair): boolean {
  return predicted >= from && predicted <= to;
}

function nearestWords(problem: ShellProblem, { pairs }: RodPairs): string {
  const { from, to } = problem;
  const off = ({ predicted }: ShellPair): number => Math.max(from - predicted, predicted - to);
  const nearest = pairs.reduce((best, pair) => (off(pair) < off(best) ? pair : best));
  return `the nearest is ${lengthWords(nearest.predicted)} with ${pairWords(problem, nearest)}`;
}

function pairWords({ grades }: ShellProblem, { upper, lower }: ShellPair): string {
  return `${grades[upper]} above and ${grades[lower]} below`;
}

/** Each rod could be served alone: names a group of rods that can't, of which none can be left out. */
function whyNotTogether(problem: ShellProblem, band: string): string {
  const search = searchOver(problem.stock);
  const inside = problem.rods.map(({ rod, pairs }) => ({
    rod,
    pairs: pairs.filter((pair) => isInside(problem, pair)),
  }));
  const isServed = (rods: typeof inside): boolean =>
    search(
      rods.map(({ pairs }) => pairs),
      2 * rods.length,
    ) !== null;
  let group = inside;
  for (const rod of inside) {
    const others = group.filter((one) => one !== rod);
    if (!isServed(others)) group = others;
  }
  const names = group.map(({ rod }) => String(rod));
  const last = names.pop() ?? '';
  const rods = names.length === 0 ? `Rod ${last}` : `Rods ${names.join(', ')} and ${last}`;
  return `${rods} together need more shells than there are to come between ${band}: ${heldWords(problem)}.`;
}

function heldWords({ grades, stock }: ShellProblem): string {
  const held = grades.flatMap((grade, at) => {
    const parts = [
      [stock.upper[at] ?? 0, 'for the upper half'],
      [stock.lower[at] ?? 0, 'for the lower half'],
      [stock.either[at] ?? 0, 'for either half'],
    ] as const;
    const words = parts.flatMap(([count, half]) => (count > 0 ? [`${count} ${half}`] : []));
    return words.length > 0 ? [`${grade} ${words.join(' and ')}`] : [];
  });
  return held.length === 0 ? 'the stock is empty' : `the stock holds ${held.join(', ')}`;
}
