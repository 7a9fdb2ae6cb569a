/* Signing on a tablet, in Node's own world: its WebCrypto refuses the ArrayBuffer of a simulated browser. */
import 'fake-indexeddb/auto';
import { beforeEach, describe, expect, it } from 'vitest';
import { evidenceFor } from '@/domain/job';
import { findStep } from '@/domain/plan';
import { OfflineServer } from '../support/offline-server';
import {
  killAndReopen,
  must,
  openTablet,
  photographed,
  picture,
  recordAll,
  recorded,
  signIn,
  type TestTablet,
} from '../support/offline-tablet';
import { smallPlan } from '../support/small-documents';
import { Journal } from '../support/journal';
import { signWorkUnder } from '../support/sign-work';
import { coverageOf } from '@/offline/evidence';
import { contentHashOf, sha256OfBytes } from '@/offline/hashing';
import type { Offline } from '@/offline/offline';
import { recordEntries, type Draft } from '@/offline/record';
import { forgetSignIn } from '@/offline/tablet';

const HOLD = 'build.caps-marked';
let server: OfflineServer;
let job: string;
let tablet: TestTablet;
let offline: Offline;

/** Everything up to the hold point, as a technician and (for deviations) the supervisor record it. */
async function workUpToHold(): Promise<void> {
  const journal = new Journal(smallPlan()).performUntil(HOLD);
  const ids = new Map<string, string>();
  for (const { kind, step, data, by, id } of journal.entries.slice(1)) {
    tablet.now += 5000;
    let draft = { kind, step, data } as Draft;
    if (draft.kind === 'deviation-disposed') {
      const [raised = '', rule] = draft.data.deviation.split(':');
      const deviation = [ids.get(raised) ?? raised, ...(rule === undefined ? [] : [rule])].join(':');
      draft = { ...draft, data: { ...draft.data, deviation } };
    }
    const photo = picture(step ?? '');
    const isPhoto = draft.kind === 'photographed';
    const drafts = isPhoto ? [{ ...photographed(photo), step } as Draft] : [draft];
    const [entry] = recorded(
      await recordEntries(offline, job, drafts, { by, photos: isPhoto ? [photo] : [] }),
    );
    ids.set(id, entry!.id);
  }
  tablet.now += 5000;
  await signWorkUnder(offline, job, HOLD);
}

async function sign(pin: string) {
  const view = offline.jobs.get(job)!;
  const step = findStep(view.state.plan, HOLD);
  if (step?.kind !== 'hold') throw new Error('no hold point');
  const draft: Draft = {
    kind: 'signed',
    step: HOLD,
    data: {
      holdPoint: step.holdPoint,
      name: 'S. Visor',
      roles: ['supervisor'],
      meaning: step.meaning,
      count: 8,
      presence: 'at the vehicle',
      covers: await coverageOf(offline, view, HOLD),
    },
    pin,
  };
  tablet.now += 5000;
  return recordEntries(offline, job, [draft], { by: 'sup' });
}

beforeEach(async () => {
  server = new OfflineServer();
  job = server.addJob(smallPlan());
  ({ tablet, offline } = await openTablet(server, { job, people: ['tech', 'sup'] }));
  server.isAway = true;
  await workUpToHold();
}, 30_000);

describe('coverage', () => {
  it('is the digest of exactly the evidence, the same before and after it was sent', async () => {
    const view = offline.jobs.get(job)!;
    const evidence = evidenceFor(view.state, HOLD);
    const before = await coverageOf(offline, view, HOLD);
    const hashes = view.pending
      .filter(({ id }) => evidence.some((kept) => kept.id === id))
      .map(({ entry }) => contentHashOf(entry))
      .sort();
    expect(before).toEqual({
      upTo: { [view.pending[0]!.entry.device]: Math.max(...evidence.map(({ deviceSeq }) => deviceSeq)) },
      count: hashes.length,
      digest: sha256OfBytes(new TextEncoder().encode(hashes.join('\n'))),
    });
    expect(hashes.length).toBeGreaterThan(20);
    server.isAway = false;
    must(await offline.sync.now());
    const after = await coverageOf(offline, await offline.jobs.refresh(job), HOLD);
    expect(after).toEqual(before);
  });
});

describe('a hold point signed on the tablet', () => {
  it('is signed by the signer’s own key after they signed out, and checked by the server', async () => {
    await forgetSignIn(offline, 'sup');
    const [entry] = recorded(await sign('4711'));
    server.isAway = false;
    must(await offline.sync.now());
    const arrived = server.entriesOf(job).at(-1);
    expect(arrived).toMatchObject({ id: entry!.id, by: 'sup', pin: { keyId: 'seal-1' } });
    const view = await offline.jobs.refresh(job);
    expect(view.state.signatures[0]).toMatchObject({ by: 'sup', checkedAt: expect.any(String) });
  });

  it('is refused with a wrong PIN, kept, and can be signed again', async () => {
    recorded(await sign('0000'));
    server.isAway = false;
    must(await offline.sync.now());
    const view = await offline.jobs.refresh(job);
    expect(view.refused).toMatchObject([{ code: 'pin-wrong' }]);
    expect(view.state.signatures).toEqual([]);
    recorded(await sign('4711'));
    must(await offline.sync.now());
    expect((await offline.jobs.refresh(job)).state.signatures).toHaveLength(1);
  });

  it('leaves the PIN nowhere on the tablet', async () => {
    recorded(await sign('4711'));
    const everything = await Promise.all(offline.db.tables.map((table) => table.toArray()));
    // The digits must not turn up by chance in a hash, so they are looked for as a value of their own.
    const values: unknown[] = [];
    const walk = (value: unknown): void => {
      values.push(value);
      if (typeof value === 'object' && value !== null) Object.values(value).forEach(walk);
    };
    walk(everything);
    expect(values).not.toContain('4711');
    expect(values).not.toContain(4711);
  });

  it('can be checked again by a server that lost it', async () => {
    server.isAway = false;
    must(await offline.sync.now());
    const backup = server.backup();
    recorded(await sign('4711'));
    must(await offline.sync.now());
    server.restore(backup);
    offline = killAndReopen(tablet, offline);
    must(await offline.sync.now());
    expect(server.entriesOf(job).at(-1)).toMatchObject({ kind: 'signed', pin: { keyId: 'seal-1' } });
  });

  it('needs a key of the signer on this tablet', async () => {
    await offline.db.authorKeys.delete('sup');
    expect(await sign('4711')).toMatchObject({
      ok: false,
      code: 'no-key',
      why: expect.stringContaining('S. Visor'),
    });
  });
});

describe('the walk through a shift', () => {
  it('delivers A’s work, the supervisor’s signature and B’s work under their true authors', async () => {
    server.isAway = false;
    await signIn(offline, server, 'mate');
    server.isAway = true;
    recorded(await sign('4711'));
    await recordAll({ tablet, offline }, job, [{ kind: 'took-over', data: { firstOfShift: true } }], 'mate');
    await forgetSignIn(offline, 'tech');
    server.session = undefined;
    const made = offline.jobs.get(job)!.pending;
    server.isAway = false;
    must(await offline.sync.now());
    const arrived = server.entriesOf(job).filter(({ device }) => device !== 'office');
    expect(arrived.map(({ id, by }) => [id, by])).toEqual(made.map(({ id, entry }) => [id, entry.by]));
    expect(made.filter(({ entry }) => entry.by === 'tech').length).toBeGreaterThanOrEqual(40);
    expect(await offline.db.refused.count()).toBe(0);
  });
});
