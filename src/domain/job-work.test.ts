import { describe, expect, it } from 'vitest';
import { Journal } from '../../tests/support/journal';
import { smallPlan } from '../../tests/support/small-documents';
import { sha256OfBytes } from '@/offline/hashing';
import type { Entry, EntryOf, Recorded } from './entry';
import { evidenceDigest } from './job-evidence';
import { myWorkWords, phaseToSign, unsignedWork, whyNotDigest } from './job-work';
import { contentHash } from './trail-hash';

const HOLD = 'build.caps-marked';
const begin = () => new Journal(smallPlan());

function covers(journal: Journal, by: string) {
  const entries = unsignedWork(journal.state, by);
  const upTo: Record<string, number> = {};
  for (const { device, deviceSeq } of entries) upTo[device] = Math.max(upTo[device] ?? 0, deviceSeq);
  return { upTo, count: entries.length, digest: 'e'.repeat(64) };
}

describe('signing for one’s own work', () => {
  it('counts what one recorded and has not signed for: no photograph, no tool, nothing of another', () => {
    const journal = begin().perform('strip.arrival').perform('strip.rags-out');
    journal.perform('strip.old-shell-kit', { by: 'mate' });
    expect(unsignedWork(journal.state, 'tech').map(({ step }) => step)).toEqual(['strip.rags-out']);
    expect(unsignedWork(journal.state, 'mate').map(({ step }) => step)).toEqual(['strip.old-shell-kit']);
    journal.signWork('tech');
    expect(unsignedWork(journal.state, 'tech')).toEqual([]);
    expect(unsignedWork(journal.state, 'mate')).toHaveLength(1);
    journal.performUntil('strip.strap');
    expect(unsignedWork(journal.state, 'tech').map(({ step }) => step)).toEqual(['strip.raise']);
  });

  it('counts a correction as work of whoever made it', () => {
    const journal = begin().performUntil('strip.strap').signWork('tech');
    const counted = journal.entries.find(({ kind }) => kind === 'counted')!;
    const data = { of: counted.id, class: 'substantive', reason: 'miscounted', data: { count: 11 } } as const;
    journal.record('corrected', data, { by: 'sup' });
    expect(unsignedWork(journal.state, 'sup')).toMatchObject([{ kind: 'corrected' }]);
  });

  it('is for the author alone, for the number there is, and never for work to come', () => {
    const journal = begin().performUntil('strip.strap');
    const own = covers(journal, 'tech');
    const ask = (over: object, options = {}) =>
      journal.ask('work-signed', { covers: { ...own, ...over } }, options);
    expect(ask({})).toEqual({ ok: true });
    expect(ask({}, { by: 'mate' })).toMatchObject({ code: 'work-to-come' });
    expect(ask({}, { with: ['mate'] })).toMatchObject({ code: 'alone' });
    expect(ask({ count: own.count + 1 })).toMatchObject({
      code: 'count-differs',
      why: expect.stringContaining(`${own.count} entries`),
    });
    expect(ask({ upTo: { 'tablet-1': 9999 } })).toMatchObject({ code: 'work-to-come' });
    expect(ask({ upTo: { constructor: 1 } })).toMatchObject({ code: 'work-to-come' });
    journal.signWork('tech');
    expect(ask({})).toMatchObject({ code: 'nothing-to-sign' });
  });

  it('has a digest of exactly the entries that it covers, in whatever order they stand', () => {
    const journal = begin().performUntil('strip.strap');
    const own = unsignedWork(journal.state, 'tech');
    const hashes = new Map(
      own.map(({ id }) => [
        id,
        contentHash(
          journal.entries.find((e) => e.id === id)!,
          sha256OfBytes,
        ),
      ]),
    );
    const judged = (covered: string[]) => {
      const digest = evidenceDigest(covered, sha256OfBytes);
      const data = { covers: { ...covers(journal, 'tech'), digest } };
      const entry = journal.draft('work-signed', data) as Entry & EntryOf<'work-signed'>;
      return whyNotDigest(journal.state, entry, { hashes, sha256: sha256OfBytes });
    };
    const all = [...hashes.values()];
    expect(judged(all.toReversed())).toEqual({ ok: true });
    for (const other of [all.slice(1), [...all.slice(1), 'f'.repeat(64)], []])
      expect(judged(other)).toMatchObject({ code: 'digest-differs' });
  });

  it('is said with the number', () => {
    expect(myWorkWords(63)).toBe('These 63 entries are my work');
    expect(myWorkWords(1)).toBe('This 1 entry is my work');
  });

  it('is a remark and no deviation where the server counts otherwise', () => {
    const journal = begin().performUntil('strip.strap');
    const entry = journal.draft('work-signed', { covers: covers(journal, 'tech') });
    const recorded: Recorded = {
      ...entry,
      seq: 50,
      recordedAt: entry.at,
      prev: '',
      clockOffsetMs: 0,
      conflict: { code: 'count-differs', why: 'You have 3 entries to sign for, not 4.' },
    };
    journal.fold(recorded);
    expect(journal.state.deviations).toEqual([]);
    expect(journal.state.remarks.at(-1)).toMatchObject({ code: 'work-signed' });
  });
});

describe('a class A hold point', () => {
  it('is not signed over work that its author has not signed for, and says whose', () => {
    const journal = begin()
      .performUntil('build.tighten@rod3')
      .tighten('build.tighten@rod3', { by: 'mate' })
      .performUntil(HOLD);
    const ask = () => journal.ask('signed', journal.signedData(HOLD), { by: 'sup', step: HOLD });
    journal.signWork('tech');
    const mine = unsignedWork(journal.state, 'mate').length;
    expect(ask()).toMatchObject({
      code: 'unsigned-work',
      why: `M. Ate has not signed ${mine} entries as their own work.`,
    });
    journal.signWork('mate');
    expect(ask()).toEqual({ ok: true });
  });

  it('is not barred for ever by somebody who has left the workshop', () => {
    const journal = begin()
      .performUntil('build.tighten@rod3')
      .tighten('build.tighten@rod3', { by: 'mate' })
      .performUntil(HOLD)
      .signWork('tech');
    journal.workshop.people.find(({ id }) => id === 'mate')!.active = false;
    expect(journal.ask('signed', journal.signedData(HOLD), { by: 'sup', step: HOLD }).ok).toBe(true);
  });
});

describe('the end of a phase', () => {
  it('asks whoever worked in it, once all of it is done, and not before', () => {
    const journal = begin().performUntil('strip.nip@rod4');
    expect(phaseToSign(journal.state, 'tech')).toBeUndefined();
    journal.performUntil('build.turn-to@stop1');
    const [phase] = journal.plan.phases;
    expect(phaseToSign(journal.state, 'tech')?.name).toBe(phase?.name);
    expect(phaseToSign(journal.state, 'mate')).toBeUndefined();
    journal.signWork('tech');
    expect(phaseToSign(journal.state, 'tech')).toBeUndefined();
  });

  it('asks before the handover, which ends the last one', () => {
    const journal = begin().performUntil('build.hand-over');
    expect(phaseToSign(journal.state, 'tech')).toBeDefined();
  });
});
