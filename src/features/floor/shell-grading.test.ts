import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { ShellPlace } from '@/domain/job-wear';
import { WEAR_FLAGS } from '@/domain/wear';
import { shellName } from '@/domain/wear-words';
import {
  benchOf,
  type Brush,
  fillOthers,
  type Grading,
  gradingOf,
  shellsOf,
  touched,
  ungraded,
} from './shell-grading';

const PLACES: ShellPlace[] = [1, 2, 3].flatMap((rod) => [
  { rod, half: 'U' as const },
  { rod, half: 'L' as const },
]);

describe('grading by a brush', () => {
  it('gives a grade, and another one over it', () => {
    expect(touched(touched({}, '1U', 2), '1U', 0)).toEqual({ '1U': { grade: 0, flags: [] } });
  });

  it('keeps the signs of a shell in one order, whichever came first', () => {
    const signs = touched(touched(touched({}, '1U', 'pitting'), '1U', 'heat'), '1U', 3);
    expect(signs['1U']).toEqual({ grade: 3, flags: ['heat', 'pitting'] });
    expect(touched(signs, '1U', 'heat')['1U']).toEqual({ grade: 3, flags: ['pitting'] });
  });

  it('gives the others one grade and leaves what was graded', () => {
    const grading = fillOthers(PLACES, touched(touched({}, '2L', 4), '3U', 'edge'), 1);
    expect(shellsOf(PLACES, grading)?.map(({ grade }) => grade)).toEqual([1, 1, 1, 4, 1, 1]);
    expect(grading['3U']).toEqual({ grade: 1, flags: ['edge'] });
  });

  it('is recorded only when every shell has a grade; a sign alone is none', () => {
    const all = fillOthers(PLACES.slice(1), {}, 0);
    expect(shellsOf(PLACES, touched(all, '1U', 'heat'))).toBeUndefined();
    expect(ungraded(PLACES, touched(all, '1U', 'heat'))).toEqual([PLACES[0]]);
  });

  it('says of a shell that has only a sign that it has no grade yet', () => {
    const [rod] = benchOf(PLACES, touched({}, '1U', 'heat'));
    expect(rod?.upper?.words).toBe('no grade yet, heat');
    expect(rod?.lower?.words).toBe('no grade yet');
  });

  it('comes back from the record as it was kept, whatever was touched', () => {
    const touches = fc.array(
      fc.tuple(fc.constantFrom(...PLACES), fc.constantFrom<Brush>(0, 1, 2, 3, 4, ...WEAR_FLAGS)),
    );
    fc.assert(
      fc.property(touches, (made) => {
        const grading = made.reduce<Grading>(
          (sum, [place, brush]) => touched(sum, shellName(place), brush),
          {},
        );
        const shells = shellsOf(PLACES, fillOthers(PLACES, grading, 1));
        expect(shells).toHaveLength(PLACES.length);
        expect(shellsOf(PLACES, gradingOf(shells!))).toEqual(shells);
      }),
    );
  });
});
