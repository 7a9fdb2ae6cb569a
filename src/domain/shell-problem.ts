/* What a choice of shells is made from, checked, and with every length in whole parts so that ties are ties. */
import { requireFinite, requireNotNegative, requirePositive } from './number-checks';
import type { ShellPair, ShellStock } from './shell-search';

type ShellHalfName = 'upper' | 'lower';

/** A rod as it was measured: its oil clearance (mm) with the grades that were in it then. */
export interface MeasuredRod {
  rod: number;
  clearance: number;
  upper: string;
  lower: string;
}

/** A grade of shell, and by how much its wall is thicker than nominal (mm; thinner is negative). */
export interface ShellGrade {
  grade: string;
  wall: number;
}

/** How many half shells of a grade lie ready, for one half or for either. Those in the rods are not among them. */
export interface ShellsInStock {
  grade: string;
  half: ShellHalfName | 'either';
  count: number;
}

/** What `chooseShells` decides from. Lengths mm. */
export interface ShellChoiceInput {
  rods: MeasuredRod[];
  grades: ShellGrade[];
  stock: ShellsInStock[];
  target: number;
  low: number;
  high: number;
  uncertainty: number;
}

/** Millionths of a micrometre: no measured length is finer, and a rounding error of a double is. */
const PARTS = 1e9;

/** A rod with every pair of grades that there is for it, in grade order. */
export interface RodPairs {
  rod: number;
  /** Indexes of the grades that are in it now. */
  upper: number;
  lower: number;
  pairs: ShellPair[];
}

/** The question in whole parts. */
export interface ShellProblem {
  rods: RodPairs[];
  grades: string[];
  stock: ShellStock;
  target: number;
  /** The limits, guarded by the uncertainty. */
  from: number;
  to: number;
}

function toParts(lengthMm: number): number {
  return Math.round(lengthMm * PARTS);
}

/** Whole parts as mm. */
export function fromParts(parts: number): number {
  return parts / PARTS;
}

/** Checks the input and reads it into whole parts; a RangeError says in plain words what can't be. */
export function readProblem(input: ShellChoiceInput): ShellProblem {
  const { rods, grades, stock, target, low, high, uncertainty } = input;
  requireNotNegative(low, 'low limit');
  requireFinite(high, 'high limit');
  requireNotNegative(uncertainty, 'uncertainty');
  if (low >= high) throw new RangeError('The low limit must be below the high limit.');
  requirePositive(target, 'target');
  if (target < low || target > high) throw new RangeError('The target must lie between the limits.');
  if (rods.length === 0) throw new RangeError('Shells are chosen for at least one rod.');
  if (grades.length === 0) throw new RangeError('Shells are chosen from at least one grade.');
  for (const { grade, wall } of grades) requireFinite(wall, `wall of grade "${grade}"`);
  requireOnce(
    grades.map(({ grade }) => grade),
    (grade) => `Grade "${grade}" is listed twice.`,
  );
  requireOnce(
    rods.map(({ rod }) => rod),
    (rod) => `Rod ${rod} is listed twice.`,
  );
  const names = grades.map(({ grade }) => grade);
  const walls = grades.map(({ wall }) => toParts(wall));
  return {
    rods: rods.map((rod) => readRod(rod, names, walls)),
    grades: names,
    stock: readStock(stock, names, 2 * rods.length),
    target: toParts(target),
    from: toParts(low) + toParts(uncertainty),
    to: toParts(high) - toParts(uncertainty),
  };
}

function readRod({ rod, clearance, upper, lower }: MeasuredRod, names: string[], walls: number[]): RodPairs {
  if (!Number.isSafeInteger(rod)) throw new RangeError('A rod is named by a whole number.');
  requirePositive(clearance, `clearance of rod ${rod}`);
  const now = [upper, lower].map((grade) => requireGrade(names, grade, `Rod ${rod} has`));
  const [nowUpper = 0, nowLower = 0] = now;
  const bare = toParts(clearance) + (walls[nowUpper] ?? 0) + (walls[nowLower] ?? 0);
  const pairs = walls.flatMap((upperWall, u) =>
    walls.map((lowerWall, l): ShellPair => {
      const [takesUpper, takesLower] = [u !== nowUpper, l !== nowLower];
      const changed = Number(takesUpper) + Number(takesLower);
      return { upper: u, lower: l, takesUpper, takesLower, changed, predicted: bare - upperWall - lowerWall };
    }),
  );
  return { rod, upper: nowUpper, lower: nowLower, pairs };
}

function readStock(stock: ShellsInStock[], names: string[], most: number): ShellStock {
  const none = (): number[] => names.map(() => 0);
  const held: Record<ShellsInStock['half'], number[]> = { upper: none(), lower: none(), either: none() };
  for (const { grade, half, count } of stock) {
    const at = requireGrade(names, grade, 'The stock names');
    if (!Object.hasOwn(held, half))
      throw new RangeError(`A shell fits the upper half, the lower or either, not "${half}".`);
    if (!Number.isInteger(count) || count < 0)
      throw new RangeError(
        `The number of shells of grade "${grade}" must be a whole number, not below zero.`,
      );
    // More than all rods together take makes no difference.
    held[half][at] = Math.min((held[half][at] ?? 0) + count, most);
  }
  return held;
}

function requireGrade(names: string[], grade: string, who: string): number {
  const at = names.indexOf(grade);
  if (at < 0) throw new RangeError(`${who} the grade "${grade}", which is not among the grades.`);
  return at;
}

function requireOnce<T>(names: T[], say: (name: T) => string): void {
  const twice = names.find((name, index) => names.indexOf(name) !== index);
  if (twice !== undefined) throw new RangeError(say(twice));
}
