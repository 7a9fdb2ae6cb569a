import { chooseShells, type ShellChoiceInput } from '@/domain/shell-choice';
import { type Figure, median, quantile, ROUNDS, saying, timed } from './report';

const LIMIT = 50;
const CASES = 400;
const RODS = 12;
const GRADES = ['thin', 'middle', 'thick', 'extra'];

/** How long the choice of shells takes for twelve rods and four grades, over many cases at random. */
export async function benchShells(): Promise<Figure[]> {
  saying(`choosing shells for ${RODS} rods, ${CASES} times`);
  const number = numbersFrom(20_011);
  const cases = Array.from({ length: CASES }, () => makeCase(number));
  const times: number[] = [];
  let possible = 0;
  // The first ones warm up and do not count.
  for (const question of cases.slice(0, 20)) chooseShells(question);
  for (const question of cases) {
    const tries: number[] = [];
    for (let round = 0; round < ROUNDS; round += 1) {
      tries.push(await timed(async () => void chooseShells(question)));
    }
    // The quickest of a few: what else the machine does meanwhile is not the choice's time.
    times.push(Math.min(...tries));
    if (chooseShells(question).possible) possible += 1;
  }
  const figure = { limit: LIMIT, unit: 'ms' } as const;
  const what = `Choice of shells for ${RODS} rods and ${GRADES.length} grades`;
  return [
    {
      ...{ ...figure, what: `${what}, median`, value: median(times) },
      detail: `${CASES} cases at random, ${possible} of them possible; median ${median(times).toFixed(2)} ms`,
    },
    {
      ...{ ...figure, what: `${what}, worst`, value: Math.max(...times) },
      detail: `99 of 100 within ${quantile(times, 0.99).toFixed(1)} ms; each case the quickest of ${ROUNDS} runs`,
    },
  ];
}

/** Cases of the kinds that are hard: few shells, rods alike, walls that seldom add up. */
function makeCase(number: (low: number, high: number) => number): ShellChoiceInput {
  const isAlike = number(0, 1) === 1;
  const alike = number(350, 640);
  const most = number(0, 4);
  const walls = number(0, 1) === 1 ? [-60, 0, 60, 120] : GRADES.map(() => number(-120, 150));
  const grade = (): string => GRADES[number(0, GRADES.length - 1)] ?? 'middle';
  return {
    rods: Array.from({ length: RODS }, (_, index) => ({
      rod: index + 1,
      clearance: (isAlike ? alike + number(-10, 10) : number(300, 690)) / 10_000,
      ...(isAlike ? { upper: 'middle', lower: 'middle' } : { upper: grade(), lower: grade() }),
    })),
    grades: GRADES.map((name, index) => ({ grade: name, wall: (walls[index] ?? 0) / 10_000 })),
    stock: GRADES.flatMap((name) =>
      (['upper', 'lower', 'either'] as const).map((half) => ({ grade: name, half, count: number(0, most) })),
    ),
    ...{ target: 0.048, low: 0.027, high: 0.076, uncertainty: 0.002 },
  };
}

/** Whole numbers from a seed (the multiplier of Park and Miller). */
function numbersFrom(seed: number): (low: number, high: number) => number {
  let state = seed;
  return (low, high) => {
    state = (state * 48_271) % 2_147_483_647;
    return low + (state % (high - low + 1));
  };
}
