import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { chooseShells, explainChoice, type ShellChoiceInput } from '@/domain/shell-choice';

const grades = [
  { grade: 'thin', wall: -0.006 },
  { grade: 'middle', wall: 0 },
  { grade: 'thick', wall: 0.006 },
];
const limits = { target: 0.048, low: 0.027, high: 0.076, uncertainty: 0.002 };
const plenty = grades.map(({ grade }) => ({ grade, half: 'either' as const, count: 24 }));

function rod(number: number, clearance: number, upper = 'middle', lower = upper) {
  return { rod: number, clearance, upper, lower };
}

function ask(over: Partial<ShellChoiceInput>): ShellChoiceInput {
  return { ...limits, grades, stock: plenty, rods: [rod(1, 0.048)], ...over };
}

describe('the choice of shells', () => {
  it('leaves a rod alone that lies on the target', () => {
    expect(chooseShells(ask({}))).toEqual({
      possible: true,
      rods: [{ rod: 1, upper: 'middle', lower: 'middle', predicted: 0.048 }],
      why: 'The rod is predicted on 0.048; no shell changes.',
    });
  });

  it('takes the wall that is thicker off the clearance', () => {
    const { rods } = chooseShells(ask({ rods: [rod(1, 0.06), rod(2, 0.036)] }));
    expect(rods).toEqual([
      { rod: 1, upper: 'thick', lower: 'thick', predicted: 0.048 },
      { rod: 2, upper: 'thin', lower: 'thin', predicted: 0.048 },
    ]);
  });

  it('takes the lower grade in the order of the list where either half would do', () => {
    const [only] = chooseShells(ask({ rods: [rod(1, 0.054)] })).rods;
    expect(only).toMatchObject({ upper: 'middle', lower: 'thick' });
    const turned = chooseShells(ask({ rods: [rod(1, 0.054)], grades: grades.toReversed() }));
    expect(turned.rods[0]).toMatchObject({ upper: 'thick', lower: 'middle' });
  });

  it('keeps what is in a rod available to it, and to no other', () => {
    const rods = [rod(1, 0.048, 'thick'), rod(2, 0.06)];
    expect(chooseShells(ask({ rods, stock: [] })).rods).toEqual([
      { rod: 1, upper: 'thick', lower: 'thick', predicted: 0.048 },
      { rod: 2, upper: 'middle', lower: 'middle', predicted: 0.06 },
    ]);
  });

  it('takes a shell that fits either half only where its own are used up', () => {
    const stock = [
      { grade: 'thick', half: 'upper' as const, count: 1 },
      { grade: 'thick', half: 'either' as const, count: 1 },
    ];
    const [only] = chooseShells(ask({ rods: [rod(1, 0.06)], stock })).rods;
    expect(only).toMatchObject({ upper: 'thick', lower: 'thick' });
    const apart = chooseShells(ask({ rods: [rod(1, 0.06)], stock: stock.slice(0, 1) }));
    expect(apart.rods[0]).toMatchObject({ upper: 'thick', lower: 'middle', predicted: 0.054 });
  });

  it('adds up what the stock names twice', () => {
    const one = { grade: 'thick', half: 'upper' as const, count: 1 };
    const rods = [rod(1, 0.054), rod(2, 0.054)];
    const { rods: chosen } = chooseShells(ask({ rods, stock: [one, one] }));
    expect(chosen.map(({ upper }) => upper)).toEqual(['thick', 'thick']);
  });

  it('reads lengths as the decimals that they are: a rounding error is no difference', () => {
    const rods = [rod(1, 0.1 + 0.2 - 0.252), rod(2, 0.048)];
    expect(chooseShells(ask({ rods })).why).toBe(
      'Every rod is predicted on 0.048, 0.000 apart at most; no shell changes.',
    );
    // 0.027 + 0.002 is 0.029 and no less
    expect(chooseShells(ask({ rods: [rod(1, 0.029)], stock: [] })).possible).toBe(true);
  });
});

describe('no choice of shells', () => {
  const none = (over: Partial<ShellChoiceInput>) => {
    const { possible, rods, why } = chooseShells(ask(over));
    expect({ possible, rods }).toEqual({ possible: false, rods: [] });
    return why;
  };

  it('names the rod that no grade brings inside', () => {
    expect(none({ rods: [rod(1, 0.048), rod(4, 0.09)] })).toBe(
      'Rod 4: no grades bring it between 0.029 and 0.074; the nearest is 0.078 with thick above and thick below.',
    );
  });

  it('names the rod whose grades are not in stock', () => {
    expect(none({ rods: [rod(1, 0.048), rod(5, 0.078)], stock: [] })).toBe(
      'Rod 5: what would bring it between 0.029 and 0.074, such as middle above and thick below, is not in stock.',
    );
  });

  it('names just the rods that need more than there is together', () => {
    const stock = [{ grade: 'thick', half: 'either' as const, count: 1 }];
    expect(none({ rods: [rod(1, 0.048), rod(2, 0.078), rod(3, 0.05), rod(6, 0.079)], stock })).toBe(
      'Rods 2 and 6 together need more shells than there are to come between 0.029 and 0.074: ' +
        'the stock holds thick 1 for either half.',
    );
  });

  it('says that the uncertainty leaves nothing', () => {
    expect(none({ uncertainty: 0.03 })).toBe(
      'For no rod: the uncertainty leaves nothing between the limits.',
    );
  });
});

describe('what can not be', () => {
  it.each<[string, Partial<ShellChoiceInput>]>([
    ['Shells are chosen for at least one rod.', { rods: [] }],
    ['Shells are chosen from at least one grade.', { grades: [] }],
    ['Rod 1 is listed twice.', { rods: [rod(1, 0.05), rod(1, 0.05)] }],
    ['A rod is named by a whole number.', { rods: [rod(1.5, 0.05)] }],
    ['Grade "thin" is listed twice.', { grades: [...grades, { grade: 'thin', wall: 0 }] }],
    [
      'The wall of grade "odd" must be a number.',
      { grades: [...grades, { grade: 'odd', wall: Number.NaN }] },
    ],
    ['The clearance of rod 1 must be greater than zero.', { rods: [rod(1, -0.01)] }],
    ['The clearance of rod 1 must be greater than zero.', { rods: [rod(1, Number.NaN)] }],
    ['Rod 1 has the grade "blue", which is not among the grades.', { rods: [rod(1, 0.05, 'blue')] }],
    [
      'The stock names the grade "blue", which is not among the grades.',
      { stock: [{ grade: 'blue', half: 'upper', count: 1 }] },
    ],
    [
      'The number of shells of grade "thin" must be a whole number, not below zero.',
      { stock: [{ grade: 'thin', half: 'upper', count: -1 }] },
    ],
    [
      'A shell fits the upper half, the lower or either, not "left".',
      { stock: [{ grade: 'thin', half: 'left' as 'upper', count: 1 }] },
    ],
    ['The low limit must be below the high limit.', { low: 0.08 }],
    ['The low limit must be zero or more.', { low: -0.001 }],
    ['The high limit must be a number.', { high: Number.POSITIVE_INFINITY }],
    ['The target must lie between the limits.', { target: 0.08 }],
    ['The uncertainty must be zero or more.', { uncertainty: -0.001 }],
  ])('%s', (words, over) => {
    expect(() => chooseShells(ask(over))).toThrow(new RangeError(words));
  });
});

describe('why not the grade next to it', () => {
  it('says that it lies further from the target', () => {
    const why = explainChoice(ask({ rods: [rod(1, 0.045, 'middle')] }), 1);
    expect(why).toContainEqual({
      half: 'upper',
      grade: 'thick',
      predicted: 0.039,
      why: 'thick would be 0.039, further from 0.048',
    });
    expect(why.map(({ half, grade }) => `${half} ${grade}`)).toEqual([
      'upper thin',
      'upper thick',
      'lower thin',
      'lower thick',
    ]);
  });

  it('says where a limit, the stock, another rod or the order speaks against it', () => {
    const whyUpper = (over: Partial<ShellChoiceInput>) =>
      explainChoice(ask(over), 1).find(({ half, grade }) => half === 'upper' && grade === 'thick')?.why;
    expect(whyUpper({ rods: [rod(1, 0.033)], stock: [] })).toBe(
      'thick would be 0.027, too near the low limit or below it: 0.029 is the least',
    );
    expect(whyUpper({ rods: [rod(1, 0.06)], stock: [] })).toBe(
      'thick would be 0.054, nearer, but then there are not shells enough for all rods',
    );
    const one = [{ grade: 'thick', half: 'upper' as const, count: 1 }];
    expect(whyUpper({ rods: [rod(1, 0.058), rod(2, 0.06)], stock: one })).toBe(
      'thick would be 0.052, nearer, but then another rod would be 0.012 off, now 0.010 at most',
    );
    expect(whyUpper({ rods: [rod(1, 0.051)] })).toBe(
      'thick would be 0.045, as near, but then 1 half shell changes, now 0',
    );
  });

  it('has nothing to say where nothing is possible, and refuses a rod that is not asked for', () => {
    expect(explainChoice(ask({ rods: [rod(1, 0.2)] }), 1)).toEqual([]);
    expect(() => explainChoice(ask({}), 2)).toThrow('Rod 2 is not among the rods');
  });
});

/** A question in tenths of a micrometre, so that the checks below add up whole numbers. */
interface Tenths {
  rods: { clearance: number; upper: number; lower: number }[];
  walls: number[];
  stock: { upper: number; lower: number; either: number }[];
  target: number;
  low: number;
  high: number;
  uncertainty: number;
}

function tenths(most: { rods: number; grades: number; stock: number }): fc.Arbitrary<Tenths> {
  return fc.integer({ min: 2, max: most.grades }).chain((count) => {
    const grade = fc.integer({ min: 0, max: count - 1 });
    const held = fc.integer({ min: 0, max: most.stock });
    return fc.record({
      rods: fc.array(
        fc.record({ clearance: fc.integer({ min: 250, max: 700 }), upper: grade, lower: grade }),
        {
          minLength: 1,
          maxLength: most.rods,
        },
      ),
      // Few steps apart, so that ties are common
      walls: fc.array(
        fc.integer({ min: -2, max: 3 }).map((steps) => steps * 30),
        {
          minLength: count,
          maxLength: count,
        },
      ),
      stock: fc.array(fc.record({ upper: held, lower: held, either: held }), {
        minLength: count,
        maxLength: count,
      }),
      target: fc.integer({ min: 400, max: 560 }),
      low: fc.integer({ min: 200, max: 390 }),
      high: fc.integer({ min: 570, max: 760 }),
      uncertainty: fc.integer({ min: 0, max: 40 }),
    });
  });
}

function asInput({ rods, walls, stock, target, low, high, uncertainty }: Tenths): ShellChoiceInput {
  const mm = (value: number) => value / 10_000;
  const name = (grade: number) => `g${grade}`;
  return {
    rods: rods.map(({ clearance, upper, lower }, index) => ({
      ...{ rod: index + 1, clearance: mm(clearance) },
      ...{ upper: name(upper), lower: name(lower) },
    })),
    grades: walls.map((wall, index) => ({ grade: name(index), wall: mm(wall) })),
    stock: stock.flatMap((held, index) =>
      (['upper', 'lower', 'either'] as const).map((half) => ({
        grade: name(index),
        half,
        count: held[half],
      })),
    ),
    ...{ target: mm(target), low: mm(low), high: mm(high), uncertainty: mm(uncertainty) },
  };
}

interface Grades {
  upper: number;
  lower: number;
}

/** Worst distance, spread, halves changed, then the grades in order; undefined where it may not be. */
function score(question: Tenths, chosen: readonly Grades[]): number[] | undefined {
  const { rods, walls, stock, target, low, high, uncertainty } = question;
  const predicted = rods.map(({ clearance, upper, lower }, i) => {
    const wall = (grade: number | undefined) => walls[grade ?? -1] ?? Number.NaN;
    return clearance - (wall(chosen[i]?.upper) - wall(upper)) - (wall(chosen[i]?.lower) - wall(lower));
  });
  const isInside = predicted.every((value) => value >= low + uncertainty && value <= high - uncertainty);
  const taken = (half: 'upper' | 'lower', grade: number) =>
    rods.filter((rod, i) => chosen[i]?.[half] === grade && rod[half] !== grade).length;
  const isHeld = stock.every(
    (held, grade) =>
      Math.max(0, taken('upper', grade) - held.upper) + Math.max(0, taken('lower', grade) - held.lower) <=
      held.either,
  );
  if (!isInside || !isHeld) return undefined;
  const halves = (['upper', 'lower'] as const).map((half) =>
    rods.filter((rod, i) => chosen[i]?.[half] !== rod[half]),
  );
  return [
    Math.max(...predicted.map((value) => Math.abs(value - target))),
    Math.max(...predicted) - Math.min(...predicted),
    halves.flat().length,
    ...chosen.flatMap(({ upper, lower }) => [upper, lower]),
  ];
}

function isBetter(one: number[], other: number[] | undefined): boolean {
  if (other === undefined) return true;
  const at = one.findIndex((value, index) => value !== other[index]);
  return at >= 0 && (one[at] ?? 0) < (other[at] ?? 0);
}

/** Tries every choice there is. */
function searchAll(question: Tenths): Grades[] | undefined {
  const { walls, rods } = question;
  const pairs = walls.flatMap((_, upper) => walls.map((_wall, lower) => ({ upper, lower })));
  let best: { chosen: Grades[]; score: number[] } | undefined;
  for (let number = 0; number < pairs.length ** rods.length; number += 1) {
    const chosen = rods.map(
      (_, i) => pairs[Math.floor(number / pairs.length ** i) % pairs.length] ?? { upper: 0, lower: 0 },
    );
    const found = score(question, chosen);
    if (found && isBetter(found, best?.score)) best = { chosen, score: found };
  }
  return best?.chosen;
}

function gradesOf(question: Tenths): Grades[] | undefined {
  const { possible, rods } = chooseShells(asInput(question));
  const index = (grade: string) => Number(grade.slice(1));
  return possible
    ? rods.map(({ upper, lower }) => ({ upper: index(upper), lower: index(lower) }))
    : undefined;
}

describe('the best choice there is', () => {
  it('is what trying every choice finds, by all four criteria', () => {
    fc.assert(
      fc.property(tenths({ rods: 3, grades: 3, stock: 2 }), (question) => {
        expect(gradesOf(question)).toEqual(searchAll(question));
      }),
      { numRuns: 400 },
    );
  });

  it('is so with four grades, and with five, where fewer prices guide the search', () => {
    fc.assert(
      fc.property(tenths({ rods: 2, grades: 5, stock: 1 }), (question) => {
        expect(gradesOf(question)).toEqual(searchAll(question));
      }),
      { numRuns: 150 },
    );
  });

  it('is never beaten by choices at random for twelve rods, and predicts what it says', () => {
    const large = tenths({ rods: 12, grades: 4, stock: 5 }).filter(({ rods }) => rods.length > 8);
    fc.assert(
      fc.property(large, fc.infiniteStream(fc.nat()), (question, numbers) => {
        const chosen = gradesOf(question);
        const own = chosen && score(question, chosen);
        expect(own === undefined).toBe(chosen === undefined);
        const next = (below: number) => (numbers.next().value ?? 0) % below;
        for (let tries = 0; tries < 200; tries += 1) {
          // From the best, the rods as they are, or anywhere: a few halves are changed.
          const start = next(2) === 0 && chosen ? chosen : question.rods;
          const other = start.map(({ upper, lower }) => ({ upper, lower }));
          for (let changes = next(6); changes >= 0; changes -= 1) {
            const rodGrades = other[next(other.length)];
            if (rodGrades) rodGrades[next(2) === 0 ? 'upper' : 'lower'] = next(question.walls.length);
          }
          const found = score(question, other);
          if (found) expect(isBetter(found, own)).toBe(false);
        }
      }),
      { numRuns: 60 },
    );
  });

  it('does not depend on the order in which the stock is named', () => {
    fc.assert(
      fc.property(tenths({ rods: 6, grades: 4, stock: 2 }), (question) => {
        const input = asInput(question);
        expect(chooseShells({ ...input, stock: input.stock.toReversed() })).toEqual(chooseShells(input));
      }),
      { numRuns: 50 },
    );
  });
});
