import { describe, expect, it } from 'vitest';
import { Journal } from '../../tests/support/journal';
import { smallPlan } from '../../tests/support/small-documents';
import type { EntryData } from './entry';
import { parseEntry } from './entry';
import { wordsOf } from './entry-words';
import { gradedShells, oldShells, WORN_SHELLS } from './job-wear';

const GRADE = 'strip.grade';

const atGrading = () => new Journal(smallPlan()).performUntil(GRADE);

type Shells = EntryData<'graded'>['shells'];
const all = (journal: Journal): Shells =>
  oldShells(journal.plan).map((place) => ({ ...place, grade: 0, flags: [] }));

describe('the old shells of an engine', () => {
  it('lie front first, the upper before the lower', () => {
    expect(oldShells(smallPlan()).map(({ rod, half }) => `${rod}${half}`)).toEqual(
      ['1U', '1L', '2U', '2L', '3U', '3L', '4U', '4L'], // prettier-ignore
    );
  });

  it('are graded once, all of them, and the step is done', () => {
    const journal = atGrading();
    journal.grade(GRADE, { '2U': { grade: 1 } });
    expect(journal.status(GRADE)).toBe('done');
    expect(gradedShells(journal.state)?.shells[2]).toEqual({ rod: 2, half: 'U', grade: 1, flags: [] });
    expect(journal.ask('graded', { shells: all(journal) }, { step: GRADE })).toMatchObject({
      code: 'already-done',
    });
  });

  it.each([
    ['one is missing', (shells: Shells) => shells.slice(1), 'not-graded', 'Shell 1U has no grade.'],
    [
      'one is there twice',
      (shells: Shells) => [...shells, shells[3]!],
      'graded-twice',
      'Shell 2L is graded twice.',
    ],
    [
      'one is of no rod of the engine',
      (shells: Shells) => [...shells, { ...shells[0]!, rod: 9 }],
      'unknown-shell',
      'The engine has no shell 9U.',
    ],
    [
      'a sign is named twice',
      (shells: Shells) => [{ ...shells[0]!, flags: ['heat' as const, 'heat' as const] }, ...shells.slice(1)],
      'flag-twice',
      'A sign is named twice on shell 1U.',
    ],
  ])('are not recorded where %s', (_, change, code, why) => {
    const journal = atGrading();
    expect(journal.ask('graded', { shells: change(all(journal)) }, { step: GRADE })).toMatchObject({
      ok: false,
      code,
      why,
    });
  });

  it.each([
    ['a grade of 5', { grade: 5 }],
    ['half a grade', { grade: 1.5 }],
    ['a sign that is unknown', { flags: ['rust'] }],
    ['a rod that is no number', { rod: '1' }],
    ['a third half', { half: 'M' }],
    ['another field', { colour: 'olive' }],
  ])('have no entry with %s', (_, odd) => {
    const journal = atGrading();
    const entry = journal.draft('graded', { shells: all(journal) }, { step: GRADE });
    const shells = [{ ...all(journal)[0]!, ...odd }, ...all(journal).slice(1)];
    expect(parseEntry(entry).ok).toBe(true);
    expect(parseEntry({ ...entry, data: { shells } }).ok).toBe(false);
  });

  it('belong to their own kind of step', () => {
    const journal = atGrading();
    expect(journal.ask('graded', { shells: all(journal) }, { step: 'strip.raise' })).toMatchObject({
      code: 'wrong-step',
    });
  });

  it('are told in one line, by what was seen', () => {
    const journal = atGrading();
    const entry = journal.grade(GRADE, { '1U': { grade: 3, flags: ['heat'] }, '4L': { grade: 1 } });
    expect(wordsOf(entry, journal.plan)).toBe(
      'Old shells side by side: 1L, 2U, 2L, 3U, 3L, 4U even grey; 4L fine lines; 1U copper showing; 1U heat',
    );
    const even = atGrading();
    expect(wordsOf(even.grade(GRADE, {}), even.plan)).toBe('Old shells side by side: all even grey');
  });
});

describe('a worn old shell', () => {
  const worn = (journal: Journal) => journal.state.deviations.filter(({ rule }) => rule === WORN_SHELLS);

  it('opens one deviation of class B for all of them, which names them and blocks nothing', () => {
    const journal = atGrading();
    journal.grade(GRADE, {
      '2U': { grade: 3 },
      '3L': { grade: 0, flags: ['heat', 'edge'] },
      '4U': { grade: 2 },
    });
    expect(worn(journal)).toMatchObject([
      {
        class: 'B',
        blocks: false,
        step: GRADE,
        words: 'Old shells to look at, with their pins: 2U copper showing; 3L even grey, heat, edge loading',
      },
    ]);
    expect(worn(journal)[0]).not.toHaveProperty('rod');
    journal.performUntil(null);
    expect(journal.state.phase).toBe('handed over');
  });

  it('names its rod where it is the only one', () => {
    const journal = atGrading();
    journal.grade(GRADE, { '2U': { grade: 4 }, '2L': { grade: 3 } });
    expect(worn(journal)).toMatchObject([{ rod: 2 }]);
  });

  it('is none where the grades are 2 at most and nothing else is seen', () => {
    const journal = atGrading();
    journal.grade(GRADE, { '2U': { grade: 2 }, '2L': { grade: 1 } });
    expect(worn(journal)).toEqual([]);
  });

  it('stays for the supervisor when its grade is corrected, and says so', () => {
    const journal = atGrading();
    const entry = journal.grade(GRADE, { '2U': { grade: 3 } });
    const correct = (shells: Shells, kind: 'clerical' | 'substantive') =>
      [
        { of: entry.id, class: kind, reason: 'looked again in daylight', data: { shells } },
        { step: GRADE },
      ] as const;
    expect(journal.ask('corrected', ...correct(all(journal), 'clerical'))).toMatchObject({
      code: 'not-clerical',
    });
    expect(journal.ask('corrected', ...correct(all(journal).slice(1), 'substantive'))).toMatchObject({
      code: 'not-graded',
    });
    journal.record('corrected', ...correct(all(journal), 'substantive'));
    expect(worn(journal).map(({ words }) => words)).toEqual([
      'Old shells to look at, with their pins: 2U copper showing (since corrected)',
    ]);
    expect(gradedShells(journal.state)?.shells.every(({ grade }) => grade === 0)).toBe(true);
    const heat = all(journal).map((shell) =>
      shell.rod === 1 ? { ...shell, flags: ['heat' as const] } : shell,
    );
    journal.record('corrected', ...correct(heat, 'substantive'));
    expect(worn(journal).map(({ words }) => words)).toEqual([
      'Old shells to look at, with their pins: 2U copper showing (since corrected)',
      'Old shells to look at, with their pins: 1U even grey, heat; 1L even grey, heat',
    ]);
    expect(journal.state.countersigns).toEqual([]);
  });

  it('is read from whatever was recorded, also where that is not in order', () => {
    const journal = atGrading();
    const [first, ...others] = all(journal);
    const shells = [first!, { ...first!, grade: 2 as const }, { ...first!, rod: 9 }, ...others.slice(3)];
    journal.fold(journal.draft('graded', { shells }, { step: GRADE }));
    expect(
      gradedShells(journal.state)?.shells.map(({ rod, half, grade }) => `${rod}${half}${grade}`),
    ).toEqual(
      ['1U2', '3U0', '3L0', '4U0', '4L0'], // prettier-ignore
    );
  });

  it('is nothing where none were graded', () => {
    expect(gradedShells(atGrading().state)).toBeUndefined();
  });
});
