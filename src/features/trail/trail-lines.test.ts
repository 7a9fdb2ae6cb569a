import { describe, expect, it } from 'vitest';
import { Journal } from '../../../tests/support/journal';
import { readTrailOf } from '../../../tests/support/read-trail';
import { smallPlan } from '../../../tests/support/small-documents';
import { linesOf, phasesOf } from './trail-lines';

const ZONE = 'Europe/Lisbon';

function begun(): Journal {
  return new Journal(smallPlan()).performUntil('strip.turn-to@stop2');
}

describe('the lines of the ledger', () => {
  it('have both clocks in the workshop’s zone', () => {
    const [opened] = linesOf(readTrailOf(begun()), ZONE);
    expect(opened).toMatchObject({
      seq: 1,
      day: 'Tue 2 Jun 2026',
      tabletClock: '09:00:05',
      recorded: '09:10:05',
      who: 'S. Visor',
      tablet: '1',
    });
  });

  it('give the server’s day where it is another than the tablet’s', () => {
    const trail = readTrailOf(begun(), (entry) => ({ ...entry, recordedAt: '2026-06-04T06:30:00.000Z' }));
    expect(linesOf(trail, ZONE)[0]).toMatchObject({ recordedDay: '4 Jun', recorded: '07:30' });
  });

  it('say with whom a thing was done, by name where the trail knows it', () => {
    const journal = begun();
    journal.record('deviation-raised', { class: 'C', words: 'a scratch', blocks: false }, { by: 'mate' });
    journal.record(
      'deviation-raised',
      { class: 'C', words: 'another', blocks: false },
      { with: ['mate', 'lead'] },
    );
    // The quality lead made no entry in this job, so the trail has the id only.
    expect(linesOf(readTrailOf(journal), ZONE).at(-1)?.withWhom).toEqual(['M. Ate', 'lead']);
  });

  it('tell confirmed from read, cycle and bolt by name', () => {
    const journal = new Journal(smallPlan()).performUntil(null);
    const said = linesOf(readTrailOf(journal), ZONE).map(({ what }) => what);
    expect(said).toContain('Bolt 2A turned, confirmed at 80°, cycle 2 of 2');
    expect(said.some((what) => /: read [\d.]+ /.test(what))).toBe(true);
  });

  it('flag a tablet whose clock is more than five minutes off, and no other', () => {
    const offBy = (ms: number) =>
      linesOf(
        readTrailOf(begun(), (entry) => ({ ...entry, clockOffsetMs: ms })),
        ZONE,
      )[0]?.isClockOff;
    expect([offBy(-301_000), offBy(301_000), offBy(300_000)]).toEqual([true, true, false]);
  });

  it('say what superseded an entry, and keep the entry', () => {
    const journal = begun();
    const last = journal.entries.at(-1)!;
    journal.record('taken-back', {
      of: last.id,
      which: 'touched by mistake, not done',
      reason: 'wrong vehicle',
    });
    const seq = journal.entries.length;
    const line = linesOf(readTrailOf(journal), ZONE).find(({ id }) => id === last.id);
    expect(line).toMatchObject({ superseded: `taken back by entry ${seq}` });
    expect(line?.what).not.toBe('');
  });

  it('say what stands there since a correction, and what stood there before', () => {
    const journal = begun();
    const counted = journal.entries.find(({ kind }) => kind === 'counted')!;
    const { seq } = linesOf(readTrailOf(journal), ZONE).find(({ id }) => id === counted.id)!;
    const reason = 'one lay under the bench';
    const data = { count: 13 };
    journal.record('corrected', { of: counted.id, class: 'substantive', reason, data });
    const lines = linesOf(readTrailOf(journal), ZONE);
    const before = lines[seq - 1]!;
    expect(before.what).toMatch(/: 12$/);
    expect(before.superseded).toBe(`corrected by entry ${lines.length}`);
    expect(lines.at(-1)!.what).toContain(
      `${reason}. Entry ${seq} reads since: ${before.what.replace('12', '13')}`,
    );
  });

  it('name the entry that a countersign or a revocation is about', () => {
    const journal = new Journal(smallPlan()).performUntil('build.sump-on');
    const chosen = journal.entries.find((one) => one.kind === 'chose-shells')!;
    const data = { ...chosen.data, upper: { grade: 'blue', lot: 'S-7' } };
    const of = journal.record('corrected', { of: chosen.id, class: 'clerical', reason: 'misread', data }).id;
    journal.record('countersigned', { of, name: 'Q. Lead' }, { by: 'lead' });
    const signed = journal.state.signatures[0]!.entry;
    journal.record('revoked', { of: signed, reason: 'the wrong vehicle' }, { by: 'lead' });
    const lines = linesOf(readTrailOf(journal), ZONE);
    const seqOf = (id: string) => lines.find((line) => line.id === id)!.seq;
    expect(lines.slice(-2).map(({ what }) => what)).toEqual([
      `Countersigned a correction (entry ${seqOf(of)})`,
      `Revoked: the wrong vehicle (entry ${seqOf(signed)})`,
    ]);
  });

  it('show a conflict in the words that it was recorded with', () => {
    const trail = readTrailOf(begun(), (entry) =>
      entry.seq === 3 ? { ...entry, conflict: { code: 'done-already', why: 'Done on tablet 2.' } } : entry,
    );
    expect(linesOf(trail, ZONE)[2]?.conflict).toBe('Done on tablet 2.');
    expect(linesOf(trail, ZONE)[3]?.conflict).toBeUndefined();
  });

  it('say when the PIN of a signature was checked', () => {
    const trail = readTrailOf(begun(), (entry) =>
      entry.seq === 2 ? { ...entry, pin: { keyId: 'k1', checkedAt: '2026-06-02T08:30:00.000Z' } } : entry,
    );
    expect(linesOf(trail, ZONE)[1]?.pinChecked).toBe('09:30:00');
  });

  it('name the kind of an entry whose plan is not in the file', () => {
    const trail = { ...readTrailOf(begun()), plans: new Map() };
    expect(linesOf(trail, ZONE)[0]?.what).toBe('opened');
  });
});

describe('the phases of the strip', () => {
  it('follow each other without gaps, the first from entry 1', () => {
    const journal = new Journal(smallPlan()).performUntil(null);
    const phases = phasesOf(readTrailOf(journal));
    expect(phases[0]).toMatchObject({ name: journal.plan.phases[0]?.name, from: 1 });
    expect(phases.at(-1)?.to).toBe(journal.entries.length);
    for (const [i, phase] of phases.entries())
      if (i > 0) expect(phase.from).toBe((phases[i - 1]?.to ?? 0) + 1);
  });

  it('call a job that is only opened just that', () => {
    expect(phasesOf(readTrailOf(new Journal(smallPlan())))).toEqual([{ name: 'opening', from: 1, to: 1 }]);
  });
});
