import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type GradedShell, WEAR_FLAGS, type WearFlag, type WearGrade, wearMap } from './wear';

/* The grades and what patterns commonly point to: common practice, no source. */

/** Grades as they lie on the bench, front first: uppers, then lowers. */
function bench(
  uppers: WearGrade[],
  lowers: WearGrade[],
  flags: Record<string, WearFlag[]> = {},
): GradedShell[] {
  const row = (half: 'U' | 'L') => (grade: WearGrade, i: number) => ({
    ...{ rod: i + 1, half, grade, flags: flags[`${i + 1}${half}`] ?? [] },
  });
  return [...uppers.map(row('U')), ...lowers.map(row('L'))];
}

describe('old shells side by side', () => {
  it('gives the worst and the means of uppers and lowers', () => {
    expect(wearMap(bench([1, 2, 1, 0], [2, 3, 2, 1]))).toMatchObject({
      worst: 3,
      meanUpper: 1,
      meanLower: 2,
    });
  });

  it('has no mean of a half that was not graded', () => {
    expect(wearMap(bench([1, 2], [])).meanLower).toBeNaN();
  });

  it('says that nothing stands out, and says nothing else then', () => {
    expect(wearMap(bench([0, 1, 1, 0], [1, 1, 0, 1])).patterns).toEqual([
      'Even grey or fine lines throughout: nothing stands out.',
    ]);
  });

  it.each([
    ['lowers', bench([0, 0, 1, 1], [1, 1, 2, 2]), /^The lower shells are worn more/],
    ['uppers', bench([1, 1, 2, 2], [0, 0, 1, 1]), /^The upper shells are worn more/],
    ['one rod', bench([0, 0, 2, 0, 0, 0], [1, 0, 2, 0, 0, 0]), /^Rod 3 stands out/],
    ['the rear', bench([0, 0, 1, 1], [0, 0, 1, 1]), /^The wear grows from the front to the rear/],
    ['the front', bench([2, 1, 0, 0], [2, 1, 0, 1]), /^The wear grows from the rear to the front/],
    ['all', bench([2, 2, 2, 2], [2, 3, 2, 2]), /^Every shell is worn through/],
  ])('tells of %s', (_, shells, words) => {
    expect(wearMap(shells).patterns).toContainEqual(expect.stringMatching(words));
  });

  it.each([
    ['a little less than a grade between the halves', bench([1, 1, 1, 1], [1, 2, 2, 2]), /more than/],
    ['half a grade at one rod', bench([1, 1, 1, 1], [1, 1, 2, 1]), /stands out:/],
    ['two rods alike', bench([0, 2, 2, 0], [0, 2, 2, 0]), /stands out:/],
    ['three rods, front and rear', bench([0, 1, 2], [0, 1, 2]), /grows/],
    ['one shell still in its first layer', bench([2, 2, 2, 1], [2, 2, 2, 2]), /Every shell/],
    ['a sign on an even shell', bench([0, 0], [0, 0], { '1U': ['edge'] }), /nothing stands out/],
  ])('makes no pattern of %s', (_, shells, words) => {
    expect(wearMap(shells).patterns.filter((pattern) => words.test(pattern))).toEqual([]);
  });

  it('names the shells that bear a sign, in engine order, the upper first, as a hint', () => {
    const shells = bench([1, 1, 1], [1, 1, 1], { '3L': ['heat'], '1L': ['heat', 'debris'], '1U': ['heat'] });
    expect(wearMap(shells).patterns).toEqual([
      'Heat at 1U, 1L, 3L: commonly too little oil or too little clearance there; the pin may have lost its hardness.',
      'Debris at 1L: commonly dirt in the oil or left in a passage; look into filter, sump and pin drillings.',
    ]);
  });

  it.each([
    ['none', [], 'There is no graded shell.'],
    ['one twice', [...bench([1], []), ...bench([2], [])], 'Shell 1U is there twice.'],
    ['a grade of 5', bench([5 as WearGrade], []), 'There is no grade 5; a shell is graded 0 to 4.'],
    ['half a grade', bench([1.5 as WearGrade], []), 'There is no grade 1.5; a shell is graded 0 to 4.'],
    ['rod 0', [{ rod: 0, half: 'U', grade: 1, flags: [] }], 'A rod has a whole number from 1.'],
    ['a third half', [{ rod: 1, half: 'M' as 'U', grade: 1, flags: [] }], 'A shell is U or L, not "M".'],
    ['rust', bench([1], [], { '1U': ['rust' as 'heat'] }), '"rust" is no sign of wear that is known here.'],
  ] satisfies [string, GradedShell[], string][])('refuses %s', (_, shells, words) => {
    expect(() => wearMap(shells)).toThrow(new RangeError(words));
  });

  it('says the same in whatever order the shells are looked at, and never sees less in a worse shell', () => {
    const graded = fc
      .array(
        fc.record({
          rod: fc.integer({ min: 1, max: 12 }),
          half: fc.constantFrom('U' as const, 'L' as const),
          grade: fc.constantFrom<WearGrade>(0, 1, 2, 3, 4),
          flags: fc.subarray([...WEAR_FLAGS]),
        }),
        { minLength: 1, maxLength: 24 },
      )
      .map((shells) => [...new Map(shells.map((shell) => [`${shell.rod}${shell.half}`, shell])).values()]);
    fc.assert(
      fc.property(graded, (shells) => {
        const { worst, patterns } = wearMap(shells);
        expect(wearMap(shells.toReversed())).toMatchObject({ worst, patterns });
        expect(worst).toBe(Math.max(...shells.map(({ grade }) => grade)));
        const [first, ...rest] = shells;
        const worse = { ...first!, grade: Math.min(4, first!.grade + 1) as WearGrade };
        expect(wearMap([worse, ...rest]).worst).toBeGreaterThanOrEqual(worst);
      }),
    );
  });
});
