import loadHighs, { type Highs } from 'highs';
import { describe, expect, it } from 'vitest';
import { chooseShells, type ShellChoiceInput } from '@/domain/shell-choice';
import { convert } from '@/domain/units';
import { shippedPlan } from '../support/shipped-plan';

/* The mathematical programme in tenths of a micrometre, so that its figures are whole numbers. */
interface Question {
  rods: { clearance: number; upper: number; lower: number }[];
  walls: number[];
  stock: { upper: number; lower: number; either: number }[];
  target: number;
  from: number;
  to: number;
}

const HALVES = ['upper', 'lower'] as const;

/** One binary variable a rod and pair of grades, as x3_0_2, with the clearance that it gives. */
function variables({ rods, walls }: Question) {
  return rods.flatMap((rod, r) =>
    walls.flatMap((upperWall, upper) =>
      walls.map((lowerWall, lower) => ({
        ...{ r, upper, lower, name: `x${r}_${upper}_${lower}` },
        predicted: rod.clearance + (walls[rod.upper] ?? 0) + (walls[rod.lower] ?? 0) - upperWall - lowerWall,
        changed: Number(upper !== rod.upper) + Number(lower !== rod.lower),
      })),
    ),
  );
}

type Variable = ReturnType<typeof variables>[number];

function sumOf(terms: readonly Variable[], weight: (term: Variable) => number): string {
  const weighed = terms.flatMap((term) => {
    const factor = weight(term);
    return factor === 0 ? [] : [`${factor < 0 ? '-' : '+'} ${Math.abs(factor)} ${term.name}`];
  });
  return weighed.length === 0 ? `0 ${terms[0]?.name ?? ''}` : weighed.join('\n ');
}

/** Worst distance, spread and halves changed, minimised one after the other; undefined if there is no choice. */
function solve(highs: Highs, question: Question): number[] | undefined {
  const all = variables(question);
  const rows: string[] = [];
  question.rods.forEach((_, r) => {
    const own = all.filter((term) => term.r === r);
    const predicted = sumOf(own, (term) => term.predicted);
    rows.push(`${sumOf(own, () => 1)} = 1`);
    rows.push(`${predicted} >= ${question.from}`, `${predicted} <= ${question.to}`);
    rows.push(`${predicted} - worst <= ${question.target}`, `${predicted} + worst >= ${question.target}`);
    rows.push(`${predicted} - top <= 0`, `${predicted} - bottom >= 0`);
  });
  question.stock.forEach((held, grade) => {
    for (const half of HALVES) {
      const taken = all.filter((term) => term[half] === grade && question.rods[term.r]?.[half] !== grade);
      if (taken.length > 0) rows.push(`${sumOf(taken, () => 1)} - ${half}${grade} <= ${held[half]}`);
    }
    rows.push(`upper${grade} + lower${grade} <= ${held.either}`);
  });
  rows.push('top - bottom - spread = 0', `${sumOf(all, (term) => term.changed)} - changed = 0`);
  const whole = [...all.map(({ name }) => name)].join(' ');
  const shared = question.stock.flatMap((_, grade) => HALVES.map((half) => `${half}${grade}`)).join(' ');
  const found: number[] = [];
  for (const goal of ['worst', 'spread', 'changed']) {
    const text = `Minimize\n goal: ${goal}\nSubject To\n ${rows.map((row, i) => `c${i}: ${row}`).join('\n ')}\nBinaries\n ${whole}\nGenerals\n ${shared}\nEnd\n`;
    const solution = highs.solve(text, { output_flag: false, mip_rel_gap: 0, mip_abs_gap: 0 });
    if (solution.Status === 'Infeasible') return undefined;
    if (solution.Status !== 'Optimal') throw new Error(`The programme ended as ${solution.Status}.`);
    const value = Math.round(solution.ObjectiveValue);
    expect(solution.ObjectiveValue).toBeCloseTo(value, 3);
    found.push(value);
    rows.push(`${goal} <= ${value}`);
  }
  return found;
}

function asInput({ rods, walls, stock, target, from, to }: Question): ShellChoiceInput {
  const mm = (value: number) => value / 10_000;
  return {
    rods: rods.map(({ clearance, upper, lower }, index) => ({
      ...{ rod: index + 1, clearance: mm(clearance), upper: `g${upper}`, lower: `g${lower}` },
    })),
    grades: walls.map((wall, grade) => ({ grade: `g${grade}`, wall: mm(wall) })),
    stock: stock.flatMap((held, grade) =>
      ([...HALVES, 'either'] as const).map((half) => ({ grade: `g${grade}`, half, count: held[half] })),
    ),
    ...{ target: mm(target), low: mm(from - 20), high: mm(to + 20), uncertainty: mm(20) },
  };
}

/** The same three figures of the choice that the product makes. */
function chosen(question: Question): number[] | undefined {
  const { possible, rods } = chooseShells(asInput(question));
  if (!possible) return undefined;
  const predicted = rods.map((rod) => Math.round(rod.predicted * 10_000));
  return [
    Math.max(...predicted.map((value) => Math.abs(value - question.target))),
    Math.max(...predicted) - Math.min(...predicted),
    question.rods.reduce(
      (sum, rod, i) => sum + HALVES.filter((half) => rods[i]?.[half] !== `g${rod[half]}`).length,
      0,
    ),
  ];
}

/** Whole numbers from a seed, the same on every machine (the multiplier of Park and Miller). */
function numbersFrom(seed: number): (low: number, high: number) => number {
  let state = seed;
  return (low, high) => {
    state = (state * 48_271) % 2_147_483_647;
    return low + (state % (high - low + 1));
  };
}

/** Twelve rods and four grades, with so many shells of each grade at most. */
function largeQuestion(seed: number, most: number): Question {
  const number = numbersFrom(seed * 7919 + most);
  const walls = [-60, 0, 60, number(70, 130)];
  return {
    rods: Array.from({ length: 12 }, () => ({
      ...{ clearance: number(300, 690), upper: number(0, 3), lower: number(0, 3) },
    })),
    walls,
    stock: walls.map(() => ({ upper: number(0, most), lower: number(0, most), either: number(0, most) })),
    ...{ target: 480, from: 290, to: 740 },
  };
}

describe('the choice of shells against the integer-programming library HiGHS', () => {
  it.each([1, 2, 3])(
    'is as good for twelve rods and four grades with up to %d of each in stock',
    async (most) => {
      const highs = await loadHighs();
      const answers = [1, 2, 3, 4].map((seed) => {
        const question = largeQuestion(seed, most);
        const answer = solve(highs, question);
        expect(chosen(question), `seed ${seed}`).toEqual(answer);
        return answer;
      });
      expect(answers.some((answer) => answer !== undefined)).toBe(true);
    },
    60_000,
  );

  it('is impossible where the library finds the stock too small, and possible with one shell more', async () => {
    const highs = await loadHighs();
    // Every rod is too wide with what is in it; each needs one thick shell, and there are eleven.
    const rods = Array.from({ length: 12 }, () => ({ clearance: 770, upper: 1, lower: 1 }));
    const none = { upper: 0, lower: 0, either: 0 };
    const question: Question = {
      ...{ rods, walls: [-60, 0, 60, 120], target: 480, from: 290, to: 740 },
      stock: [none, none, { upper: 4, lower: 3, either: 1 }, { upper: 2, lower: 1, either: 0 }],
    };
    expect(solve(highs, question)).toBeUndefined();
    expect(chosen(question)).toBeUndefined();
    const enough = {
      ...question,
      stock: [none, none, { upper: 4, lower: 3, either: 2 }, { upper: 2, lower: 1, either: 0 }],
    };
    expect(chosen(enough)).toEqual(solve(highs, enough));
    expect(chosen(enough)).toBeDefined();
  }, 60_000);
});

describe('select fit', () => {
  const limits = { target: 0.048, low: 0.02, high: 0.09, uncertainty: 0 };
  const plenty = (walls: number[]) =>
    walls.map((_, i) => ({ grade: `w${i}`, half: 'either' as const, count: 24 }));
  const named = (walls: number[]) => walls.map((wall, i) => ({ grade: `w${i}`, wall }));

  // SF-1, a training page on choosing bearings by stamped sizes: bore code 4 and pin code 3 make row 7.
  it('goes by the sum of what bore and pin are off: codes 4 and 3 get what 5 and 2 get', () => {
    const walls = [0, 0.003, 0.006, 0.009, 0.012];
    const code = 0.003;
    const rods = [
      [4, 3],
      [5, 2],
    ].map(([bore = 0, pin = 0], index) => ({
      ...{ rod: index + 1, clearance: 0.048 + (bore + pin) * code, upper: 'w0', lower: 'w0' },
    }));
    const { rods: got } = chooseShells({ ...limits, rods, grades: named(walls), stock: plenty(walls) });
    expect(got.map(({ predicted }) => predicted)).toEqual([0.048, 0.048]);
    expect([got[1]?.upper, got[1]?.lower]).toEqual([got[0]?.upper, got[0]?.lower]);
  });

  // SF-2, arithmetic (common practice, no source): each of the two shells takes half of what bore and pin add.
  it.each([
    ['A', '1', 0],
    ['A', '2', 0.003],
    ['B', '1', 0.003],
    ['B', '2', 0.006],
    ['C', '3', 0.012],
  ] as const)('bore %s and pin %s need %d mm of wall a shell', (bore, pin, wall) => {
    const walls = [0, 0.003, 0.006, 0.009, 0.012];
    const wider = { A: 0, B: 0.006, C: 0.012 }[bore] + { 1: 0, 2: 0.006, 3: 0.012 }[pin];
    const rods = [{ rod: 1, clearance: 0.048 + wider, upper: 'w0', lower: 'w0' }];
    const [got] = chooseShells({ ...limits, rods, grades: named(walls), stock: plenty(walls) }).rods;
    const wallOf = (grade: string | undefined) => walls[Number(grade?.slice(1))] ?? Number.NaN;
    expect(got?.predicted).toBe(0.048);
    expect((wallOf(got?.upper) + wallOf(got?.lower)) / 2).toBeCloseTo(wall, 9);
  });

  // SF-3, textbook rule, from memory: (T of the bore + T of the pin) / groups is what is left of their sum.
  it('of tolerances of 0.018 and 0.018 in three groups leaves 0.012 of 0.036', () => {
    const walls = [0, 0.012];
    const rods = Array.from({ length: 12 }, (_, i) => ({
      ...{ rod: i + 1, clearance: 0.042 + (i * 0.036) / 12, upper: 'w0', lower: 'w0' },
    }));
    const { rods: got } = chooseShells({ ...limits, rods, grades: named(walls), stock: plenty(walls) });
    const spread = (values: number[]) => Math.max(...values) - Math.min(...values);
    // A half-open range: the last of twelve lies one step short of its end.
    expect(spread(rods.map(({ clearance }) => clearance))).toBeCloseTo(0.036 - 0.003, 9);
    expect(spread(got.map(({ predicted }) => predicted))).toBeCloseTo(0.012 - 0.003, 9);
  });

  // SF-4, a bearing maker's advice in a trade article: halves of neighbouring sizes mix up to 0.0005 in of wall.
  it.each(['merrow-s6-rod-bearings', 'corvane-v8-rod-bearings'] as const)(
    'of %s mixes neighbouring grades that differ by 0.0005 in of wall at most',
    (route) => {
      const walls = shippedPlan(route)
        .engine.shells.grades.map(({ wall }) => Number(wall))
        .sort((a, b) => a - b);
      const steps = walls.slice(1).map((wall, i) => wall - (walls[i] ?? 0));
      expect(Math.max(...steps)).toBeLessThanOrEqual(convert(0.0005, 'in', 'mm'));
    },
  );
});
