import { describe, expect, it } from 'vitest';
import { Journal } from '../../../tests/support/journal';
import { readTrailOf } from '../../../tests/support/read-trail';
import { smallPlan } from '../../../tests/support/small-documents';
import { relatedTo } from './related';

const zone = 'Europe/Lisbon';

describe('entries that are about one another', () => {
  const journal = new Journal(smallPlan()).performUntil('strip.clean@rod2');
  const at = journal.entries.findIndex(({ kind }) => kind === 'gauged');
  const reading = journal.entries[at]!;
  const correct = (clearance: string, reason: string) =>
    journal.record(
      'corrected',
      {
        of: reading.id,
        class: 'substantive',
        reason,
        data: { ...reading.data, clearance },
      },
      { by: 'sup' },
    );
  correct('0.052', 'misread');
  correct('0.055', 'the other band');
  const seq = (n: number) => journal.entries.length - 1 + n;
  const trail = readTrailOf(journal);

  it('show of a corrected one each correction: old and new value, who, when, why', () => {
    expect(relatedTo(trail, at + 1, zone)).toMatchObject([
      {
        seq: seq(0),
        title: `Corrected by entry ${seq(0)}`,
        before: expect.stringContaining('0.048 mm'),
        after: expect.stringContaining('0.052 mm'),
        who: 'S. Visor',
        when: expect.stringContaining('2 Jun'),
        why: 'misread',
      },
      {
        seq: seq(1),
        before: expect.stringContaining('0.052 mm'),
        after: expect.stringContaining('0.055 mm'),
        why: 'the other band',
      },
    ]);
  });

  it('show of the correction what it corrects, and the way back', () => {
    expect(relatedTo(trail, seq(1), zone)).toMatchObject([
      { seq: at + 1, title: `Corrects entry ${at + 1}`, before: expect.stringContaining('0.052 mm') },
    ]);
  });

  it('are none for an entry that nobody said anything about', () => {
    expect(relatedTo(trail, 1, zone)).toEqual([]);
  });

  it('show what was taken back, and a signature that was revoked', () => {
    const other = new Journal(smallPlan()).performUntil('build.caps-marked');
    const { id } = other.sign('build.caps-marked');
    other.record('revoked', { of: id, reason: 'the wrong vehicle' }, { by: 'lead' });
    const total = other.entries.length;
    expect(relatedTo(readTrailOf(other), total - 1, zone)).toMatchObject([
      { seq: total, title: `Revoked by entry ${total}`, who: 'Q. Lead', why: 'the wrong vehicle' },
    ]);
    expect(relatedTo(readTrailOf(other), total, zone)).toMatchObject([
      { seq: total - 1, title: `Revokes entry ${total - 1}` },
    ]);
  });
});
