import { describe, expect, it } from 'vitest';
import type { GradedShell } from './wear';
import { gradingWords, lookWords, meansWords } from './wear-words';

const shell = (
  rod: number,
  half: 'U' | 'L',
  grade: GradedShell['grade'],
  ...flags: GradedShell['flags']
) => ({
  ...{ rod, half, grade, flags },
});

describe('graded shells in words', () => {
  it('says of one what is seen on it', () => {
    expect(lookWords(shell(1, 'U', 4))).toBe('material missing');
    expect(lookWords(shell(1, 'U', 0, 'heat', 'edge'))).toBe('even grey, heat, edge loading');
  });

  it.each([
    [[shell(1, 'U', 1), shell(1, 'L', 1)], 'all fine lines'],
    [[shell(1, 'U', 1, 'pitting'), shell(1, 'L', 1, 'pitting')], 'all fine lines; all pitting'],
    [
      [shell(1, 'U', 3, 'heat'), shell(1, 'L', 0), shell(2, 'U', 0)],
      '1L, 2U even grey; 1U copper showing; 1U heat',
    ],
    [[shell(1, 'U', 2)], '1U worn to the next layer'],
    [[], ''],
  ])('says of all of them which is how: %#', (shells, words) => {
    expect(gradingWords(shells)).toBe(words);
  });

  it('leaves out the mean of a half that was not graded', () => {
    expect(meansWords({ meanUpper: 7 / 6, meanLower: 0 })).toBe('Mean grade: uppers 1.2, lowers 0.0');
    expect(meansWords({ meanUpper: 1, meanLower: NaN })).toBe('Mean grade: uppers 1.0');
  });
});
