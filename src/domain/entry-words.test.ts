import { describe, expect, it } from 'vitest';
import { Journal } from '../../tests/support/journal';
import { smallPlan } from '../../tests/support/small-documents';
import { wordsOf } from './entry-words';

describe('an entry in words', () => {
  const journal = new Journal(smallPlan()).performUntil(null);
  const said = journal.entries.map((entry) => wordsOf(entry, journal.plan));

  it('says what was confirmed and what was read, and never one for the other', () => {
    expect(said).toContain('Bolt 2A turned, confirmed at 80°, cycle 2 of 2');
    const entry = journal.entries.find((e) => e.kind === 'tightened' && e.data.target.kind === 'angle')!;
    const read = { ...entry, data: { ...entry.data, how: 'typed', value: '82' } } as typeof entry;
    expect(wordsOf(read, journal.plan)).toBe('Bolt 2A turned, read 82° of 80°, cycle 1 of 2');
  });

  it('names rods, ends, marks, releases and signatures as the trade does', () => {
    expect(said).toContain('Rod 2, front: 0.048 mm ± 0.005 by the card');
    expect(said).toContain('Bolt 2A marked, yellow');
    expect(said).toContain('Bolt 2B released after cycle 1');
    expect(said).toContain('Sump bolts 1 to 12 tightened, confirmed at 12 N·m, cycle 1 of 1');
    expect(said.some((words) => words.startsWith('Signed the hold point “Caps marked”'))).toBe(true);
  });

  it('flags what was recorded afterwards', () => {
    const entry = { ...journal.entries[1]!, afterwards: { when: 'yesterday 16:00', reason: 'tablet flat' } };
    expect(wordsOf(entry, journal.plan)).toMatch(
      /\(recorded afterwards, done yesterday 16:00: tablet flat\)$/,
    );
  });

  it('says of shells what was proposed only where others were taken', () => {
    const entry = journal.entries.find((e) => e.kind === 'chose-shells')!;
    const { upper, lower } = entry.data;
    const proposing = (grade: string) =>
      wordsOf(
        {
          ...entry,
          data: { upper, lower, proposed: { upper: grade, lower: lower.grade }, reason: 'none left' },
        },
        journal.plan,
      );
    expect(proposing(upper.grade)).toBe(wordsOf(entry, journal.plan));
    expect(proposing('red')).toMatch(/; proposed were upper red, lower blue: none left$/);
  });

  it('has a line for every entry of a whole job', () => {
    expect(said.every((words) => words.length > 3)).toBe(true);
  });
});
