/*
 * What the old shells say when they lie side by side. The grades are those of the trade, told by eye: nothing here
 * is measured, and what a pattern commonly points to is a hint for whoever looks further, never a verdict.
 * Common practice, no source.
 */

/** How far a shell is worn, by its face. */
export type WearGrade = 0 | 1 | 2 | 3 | 4;

/** What else is seen on a shell, whatever its grade. */
export const WEAR_FLAGS = ['heat', 'debris', 'edge', 'pitting'] as const;
export type WearFlag = (typeof WEAR_FLAGS)[number];

/** What each grade looks like. */
export const WEAR_GRADES: readonly { grade: WearGrade; name: string; looks: string }[] = [
  { grade: 0, name: 'even grey', looks: 'dull grey all over, no lines' },
  { grade: 1, name: 'fine lines', looks: 'lines around the face, the colour still even' },
  { grade: 2, name: 'worn to the next layer', looks: 'a lighter, olive layer shows' },
  { grade: 3, name: 'copper showing', looks: 'reddish patches' },
  { grade: 4, name: 'material missing', looks: 'craters, pieces gone' },
];

/** What each flag looks like, and what it commonly points to. */
export const WEAR_SIGNS: Readonly<Record<WearFlag, { name: string; looks: string; hint: string }>> = {
  heat: {
    name: 'heat',
    looks: 'narrowed, ends pulled in, darkened',
    hint: 'commonly too little oil or too little clearance there; the pin may have lost its hardness',
  },
  debris: {
    name: 'debris',
    looks: 'particles pressed in, scored around',
    hint: 'commonly dirt in the oil or left in a passage; look into filter, sump and pin drillings',
  },
  edge: {
    name: 'edge loading',
    looks: 'worn along one edge only',
    hint: 'commonly a bent or twisted rod, a tapered pin, or dirt behind the shell',
  },
  pitting: {
    name: 'pitting',
    looks: 'small holes with clean edges',
    hint: 'commonly the shell’s layer tired by load or eaten by old or thinned oil',
  },
};

/** One old shell as it was graded. */
export interface GradedShell {
  rod: number;
  half: 'U' | 'L';
  grade: WearGrade;
  flags: readonly WearFlag[];
}

/** What the shells say together. */
export interface WearMap {
  /** The highest grade of all. */
  worst: WearGrade;
  /** The mean grade of the upper shells, and of the lower; NaN where none was graded. */
  meanUpper: number;
  meanLower: number;
  /** What stands out, each with what it commonly points to; a hint, never a verdict. */
  patterns: string[];
}

/** From here on one half of the shells counts as worn more than the other, or one rod as standing out, in grades. */
const STANDS_OUT = 1;
/** So much more at one end of the engine than at the other, between the means of its front and rear halves. */
const GRADIENT = 1;

/**
 * The worst, the means and the patterns of graded old shells. Throws a RangeError where there is no shell, one is
 * there twice, or a grade, flag or rod number is none. Common practice, no source.
 */
export function wearMap(shells: readonly GradedShell[]): WearMap {
  requireShells(shells);
  const upper = meanOf(shells.filter(({ half }) => half === 'U'));
  const lower = meanOf(shells.filter(({ half }) => half === 'L'));
  return {
    worst: shells.reduce<WearGrade>((worst, { grade }) => (grade > worst ? grade : worst), 0),
    meanUpper: upper,
    meanLower: lower,
    patterns: [
      ...halfPattern(upper, lower),
      ...rodPatterns(shells),
      ...gradientPattern(shells),
      ...overallPattern(shells),
      ...flagPatterns(shells),
    ],
  };
}

function halfPattern(upper: number, lower: number): string[] {
  if (lower - upper >= STANDS_OUT)
    return [
      'The lower shells are worn more than the upper ones: commonly high speed, since the lower shell pulls the piston back.',
    ];
  if (upper - lower >= STANDS_OUT)
    return [
      'The upper shells are worn more than the lower ones: commonly high load at low speed, since the upper shell takes the push of the gas.',
    ];
  return [];
}

function rodPatterns(shells: readonly GradedShell[]): string[] {
  const rods = rodsOf(shells);
  if (rods.length < 3) return [];
  return rods.flatMap((rod) => {
    const own = meanOf(shells.filter((shell) => shell.rod === rod));
    const others = rods
      .filter((one) => one !== rod)
      .map((one) => meanOf(shells.filter((s) => s.rod === one)));
    return own - Math.max(...others) >= STANDS_OUT
      ? [
          `Rod ${rod} stands out: commonly its own oil drilling, pin, clearance or rod, rather than something of the whole engine.`,
        ]
      : [];
  });
}

function gradientPattern(shells: readonly GradedShell[]): string[] {
  const rods = rodsOf(shells);
  if (rods.length < 4) return [];
  const half = Math.floor(rods.length / 2);
  const meanOfRods = (some: readonly number[]) => meanOf(shells.filter(({ rod }) => some.includes(rod)));
  const [front, rear] = [meanOfRods(rods.slice(0, half)), meanOfRods(rods.slice(-half))];
  if (Math.abs(front - rear) < GRADIENT) return [];
  const [more, less] = rear > front ? ['rear', 'front'] : ['front', 'rear'];
  return [
    `The wear grows from the ${less} to the ${more}: commonly the oil supply along the crank; look at which end is fed last.`,
  ];
}

function overallPattern(shells: readonly GradedShell[]): string[] {
  const worn = shells.filter(({ grade }) => grade >= 2).length;
  if (worn === shells.length)
    return [
      'Every shell is worn through its first layer: commonly long service, thinned or overdue oil, rather than one rod.',
    ];
  if (shells.every(({ grade, flags }) => grade <= 1 && flags.length === 0))
    return ['Even grey or fine lines throughout: nothing stands out.'];
  return [];
}

function flagPatterns(shells: readonly GradedShell[]): string[] {
  return WEAR_FLAGS.flatMap((flag) => {
    const marked = shells.filter(({ flags }) => flags.includes(flag));
    if (marked.length === 0) return [];
    const where = marked
      .toSorted((a, b) => a.rod - b.rod || (a.half < b.half ? 1 : -1))
      .map(({ rod, half }) => `${rod}${half}`)
      .join(', ');
    const { name, hint } = WEAR_SIGNS[flag];
    return [`${name.charAt(0).toUpperCase()}${name.slice(1)} at ${where}: ${hint}.`];
  });
}

function rodsOf(shells: readonly GradedShell[]): number[] {
  return [...new Set(shells.map(({ rod }) => rod))].sort((a, b) => a - b);
}

function meanOf(shells: readonly GradedShell[]): number {
  return shells.reduce((sum, { grade }) => sum + grade, 0) / shells.length;
}

function requireShells(shells: readonly GradedShell[]): void {
  if (shells.length === 0) throw new RangeError('There is no graded shell.');
  const seen = new Set<string>();
  for (const { rod, half, grade, flags } of shells) {
    if (!Number.isInteger(rod) || rod < 1) throw new RangeError('A rod has a whole number from 1.');
    if (!['U', 'L'].includes(half)) throw new RangeError(`A shell is U or L, not "${half as string}".`);
    if (!WEAR_GRADES.some((one) => one.grade === grade))
      throw new RangeError(`There is no grade ${String(grade)}; a shell is graded 0 to 4.`);
    const unknown = flags.find((flag) => !WEAR_FLAGS.includes(flag));
    if (unknown !== undefined)
      throw new RangeError(`"${unknown as string}" is no sign of wear that is known here.`);
    const name = `${rod}${half}`;
    if (seen.has(name)) throw new RangeError(`Shell ${name} is there twice.`);
    seen.add(name);
  }
}
