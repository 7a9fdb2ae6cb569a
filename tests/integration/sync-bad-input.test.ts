import { beforeEach, describe, expect, it } from 'vitest';
import { POST as postSync } from '@/pages/api/sync/index';
import type { Entry } from '@/domain/entry';
import { verifyTrail } from '@/domain/trail';
import { exportTrail } from '@/server/job-export';
import { nodeChecks } from '@/server/trail-checks';
import type { PushedEntry } from '@db/scripted-tablet';
import {
  ask,
  enrolTestTablet,
  type OpenedJob,
  openShop,
  openTestJob,
  type Shop,
  type TestTablet,
  trailOf,
} from '../support/tablet';

/*
 * Whatever stands in `entries`, each gets a verdict of its own, good ones beside it go in, what was refused is
 * kept, and the chain stays whole.
 */

let shop: Shop;
let tablet: TestTablet;
let job: OpenedJob;
let good: PushedEntry;

beforeEach(async () => {
  shop = await openShop();
  const { supervisor, ann, ben } = shop.people;
  tablet = await enrolTestTablet(shop, [supervisor, ann, ben]);
  job = await openTestJob(tablet, supervisor);
  await tablet.record(
    job.id,
    { kind: 'deviation-raised', data: { class: 'C', words: 'a scratch', blocks: false } },
    { by: ann },
  );
  good = tablet.held(job.id).outbox[0]!;
});

interface Verdict {
  id: string;
  verdict: string;
  code?: string;
  reason?: string;
}

/** Pushes a text in place of the entries, as no honest tablet would write it. */
async function pushText(entries: string, from: TestTablet = tablet): Promise<Verdict[]> {
  const sentAt = new Date(tablet.now).toISOString();
  const envelope = { device: from.device, sentAt, jobs: [{ id: job.id, have: null }] };
  const body = `${JSON.stringify(envelope).slice(0, -1)},"entries":[${entries}]}`;
  const answer = await ask(postSync, { tablet: from.credential, body });
  expect(answer.status, answer.text.slice(0, 500)).toBe(200);
  return (answer.body as { verdicts: Verdict[] }).verdicts;
}

const push = (entries: unknown[], from?: TestTablet) =>
  pushText(entries.map((one) => JSON.stringify(one)).join(','), from);

/** The good entry changed, with an id of its own, signed as it then reads. */
function signed(change: object, by = shop.people.ann): Promise<PushedEntry> {
  return tablet.signed({ ...good.entry, id: shop.app.ids.next(), ...change }, { by });
}

/** The good entry changed after it was signed: for what can not be hashed at all. */
const unsigned = (change: object) => ({
  ...good,
  entry: { ...good.entry, id: shop.app.ids.next(), ...change },
});

const refusedRows = () => shop.app.db.selectFrom('refused_entry').selectAll().execute();

/** The good entry still goes in, everything refused is kept, and the trail is whole. */
async function expectWhole(refused: number): Promise<void> {
  expect(await push([good])).toMatchObject([{ verdict: 'recorded' }]);
  expect(await refusedRows()).toHaveLength(refused);
  const kinds = (await trailOf(shop.app, job.id)).map(({ kind }) => kind);
  expect(kinds.filter((kind) => kind === 'deviation-raised')).toHaveLength(1);
  const { text } = await exportTrail(shop.app, shop.people.owner, job.id);
  expect(await verifyTrail(text, nodeChecks())).toMatchObject({ ok: true });
}

describe('in a push', () => {
  it('what is no entry at all is refused and kept', async () => {
    const texts = [
      'null',
      '7',
      '"text"',
      '[]',
      '{}',
      '[[[]]]',
      '{"entry":null}',
      '{"entry":[]}',
      '{"entry":{}}',
      'true',
    ];
    const verdicts = await pushText(texts.join(','));
    expect(verdicts).toHaveLength(texts.length);
    for (const verdict of verdicts)
      expect(verdict).toMatchObject({ verdict: 'refused', code: 'malformed', id: '' });
    await expectWhole(texts.length);
  });

  it('a time that never was is refused', async () => {
    const times = ['2031-02-30T09:00:00.000Z', '2031-05-07T25:00:00.000Z', '2031-13-01T09:00:00Z'];
    const verdicts = await push(await Promise.all(times.map((at) => signed({ at }))));
    expect(verdicts).toHaveLength(times.length);
    for (const verdict of verdicts) expect(verdict).toMatchObject({ verdict: 'refused', code: 'malformed' });
    await expectWhole(times.length);
  });

  it('text, numbers and keys that may not be hashed are refused, each with its place', async () => {
    const { data } = good.entry;
    const bad: [object, RegExp][] = [
      [{ data: { ...data, words: 'half \ud800' } }, /words/],
      [{ data: { ...data, words: 'e\u0301' } }, /words/],
      [{ author: { ...good.entry.author, name: 'Ann\udc00' } }, /name/],
      [{ basis: 1.5 }, /basis/],
      [{ basis: 2 ** 53 }, /basis/],
      [{ basis: -1 }, /basis/],
      [{ deviceSeq: 0 }, /deviceSeq/],
      [{ workshop: '9' }, /workshop/],
      [{ data: { ...data, rod: 0.1 } }, /rod/],
      [{ data: { ...data, words: '' } }, /words/],
      [{ data: { ...data, words: 'x'.repeat(2001) } }, /words/],
      [{ step: 'x'.repeat(121) }, /step/],
      [{ by: 'x'.repeat(61) }, /by/],
      [{ v: 0 }, /v/],
      [{ v: '1' }, /v/],
      [{ v: -3 }, /v/],
      [{ v: 1.5 }, /v/],
      [{ kind: 'constructor' }, /kind/],
      [{ kind: '__proto__' }, /kind/],
      [{ kind: 'ate-lunch' }, /kind/],
      [{ id: 'not an id' }, /id/],
      [{ id: good.entry.id.toUpperCase().replace('0197', 'ABCD') }, /id/],
      [{ at: '2031-13-45T00:00:00Z' }, /at/],
      [{ at: '2031-05-06' }, /at/],
      [{ at: '2031-05-06T07:00:00+01:00' }, /at/],
      [{ seq: 3 }, /seq/],
      [{ conflict: { code: 'x', why: 'y' } }, /conflict/],
      [{ pin: { keyId: 'x', checkedAt: 'y' } }, /pin/],
      [{ prev: 'a'.repeat(64) }, /prev/],
    ];
    const verdicts = await push(bad.map(([change]) => unsigned(change)));
    for (const [index, [change, where]] of bad.entries()) {
      const what = JSON.stringify(change).slice(0, 80);
      expect(verdicts[index], what).toMatchObject({ verdict: 'refused', code: 'malformed' });
      expect(verdicts[index]?.reason, what).toMatch(where);
    }
    await expectWhole(bad.length);
  });

  it('keys that every object has are fields like any other, and refused as unknown', async () => {
    const entry = JSON.stringify({ ...good.entry, id: shop.app.ids.next() });
    const rest = JSON.stringify(good).replace(/^\{"entry":\{.*?\},"signature"/, '"signature"');
    const withKey = (where: 'entry' | 'data', key: string) => {
      const added = `"${key}":{"ok":true},`;
      const text =
        where === 'entry' ? `{${added}${entry.slice(1)}` : entry.replace('"data":{', `"data":{${added}`);
      return `{"entry":${text},${rest}`;
    };
    for (const key of ['__proto__', 'constructor', 'hasOwnProperty', 'toJSON']) {
      for (const where of ['entry', 'data'] as const) {
        expect(await pushText(withKey(where, key)), `${key} in ${where}`).toMatchObject([
          { verdict: 'refused' },
        ]);
      }
    }
    expect(({} as { ok?: boolean }).ok).toBeUndefined();
    const { text } = await exportTrail(shop.app, shop.people.owner, job.id);
    expect(await verifyTrail(text, nodeChecks())).toMatchObject({ ok: true });
  });

  it('nesting without end and numbers without end are refused', async () => {
    const deep = (open: string, close: string) => open.repeat(40_000) + close.repeat(40_000);
    const texts = [deep('[', ']'), `${'{"a":'.repeat(20_000)}1${'}'.repeat(20_000)}`];
    for (const text of texts) {
      const entry = JSON.stringify({ ...good, entry: { ...good.entry, data: 'HERE' } });
      const verdicts = await pushText(entry.replace('"HERE"', text));
      expect(verdicts).toMatchObject([{ verdict: 'refused', code: 'malformed' }]);
    }
    const huge = JSON.stringify(unsigned({})).replace('"basis":1', `"basis":1e999`);
    expect(await pushText(huge)).toMatchObject([{ verdict: 'refused', code: 'malformed' }]);
  });

  it('a newer version waits, however it looks otherwise', async () => {
    expect(
      await push([unsigned({ v: 2, data: { anything: [1.5] } }), { entry: { v: 9, id: 'x' } }]),
    ).toMatchObject([
      { verdict: 'waiting', code: 'server-older' },
      { verdict: 'waiting', code: 'server-older' },
    ]);
    await expectWhole(0);
  });

  it('the same id twice with other content: the first counts, the second is kept', async () => {
    const other = await tablet.signed(
      {
        ...good.entry,
        deviceSeq: good.entry.deviceSeq + 1,
        data: { ...good.entry.data, words: 'else' },
      } as Entry,
      { by: shop.people.ann },
    );
    expect(await push([good, other, good, other])).toMatchObject([
      { verdict: 'recorded' },
      { verdict: 'refused', code: 'id-taken' },
      { verdict: 'already recorded' },
      { verdict: 'refused', code: 'id-taken' },
    ]);
    expect(await refusedRows()).toHaveLength(1);
  });

  it('what only the server makes, and what claims to be by it, is refused', async () => {
    const made = [
      { kind: 'refused', data: { content: 'a'.repeat(64), code: 'x', reason: 'y' } },
      { kind: 'tablet-lost', data: { tablet: tablet.device, from: 3 } },
      { kind: 'restored', data: { after: 1, reason: 'because' } },
      { by: 'workshop', author: { name: 'Workshop', roles: [] } },
      { device: 'server' },
      { by: 'workshop', device: 'server' },
    ];
    const entries = await Promise.all(made.map((change, n) => signed({ ...change, deviceSeq: 2 + n })));
    for (const verdict of await push(entries)) expect(verdict).toMatchObject({ verdict: 'refused' });
    const rows = await trailOf(shop.app, job.id);
    const told = rows.filter(({ device_id }) => device_id === null).map(({ kind }) => kind);
    expect(told).toEqual(made.map(() => 'refused'));
  });

  it('the signature of another entry, of another person and none are refused', async () => {
    const other = await signed({});
    const bens = await signed({ by: shop.people.ben.id }, shop.people.ann);
    const bad = [
      { ...good, entry: { ...good.entry, id: shop.app.ids.next() } },
      { ...other, signature: good.signature },
      { ...bens, key: good.key },
      { ...other, signature: 'A'.repeat(86) },
      { ...other, signature: '' },
      { entry: other.entry, key: other.key },
      { entry: other.entry, signature: other.signature },
      { ...other, key: 'f'.repeat(16) },
      { ...other, extra: true },
      { ...other, sealed: { keyId: 'x' } },
    ].map((one) => ({ ...one, entry: { ...one.entry, id: shop.app.ids.next() } }));
    for (const verdict of await push(bad)) expect(verdict).toMatchObject({ verdict: 'refused' });
    const rows = await trailOf(shop.app, job.id);
    expect(rows.map(({ kind }) => kind)).not.toContain('deviation-raised');
  });

  it('clocks that are ages off are flagged and never refused', async () => {
    const ats = ['0000-01-01T00:00:00Z', '1970-01-01T00:00:00.000Z', '9999-12-31T23:59:59.999Z'];
    const entries = await Promise.all(ats.map((at, n) => signed({ at, deviceSeq: 2 + n })));
    for (const verdict of await push(entries)) expect(verdict).toMatchObject({ verdict: 'recorded' });
    for (const sentAt of ['0001-01-01T00:00:00Z', '9999-12-31T23:59:59Z']) {
      const body = { device: tablet.device, sentAt, jobs: [], entries: [] };
      expect(await ask(postSync, { tablet: tablet.credential, body })).toMatchObject({ status: 200 });
    }
    const { text } = await exportTrail(shop.app, shop.people.owner, job.id);
    expect(await verifyTrail(text, nodeChecks())).toMatchObject({ ok: true });
  });

  it('for a job that is not there or that is closed nothing is lost', async () => {
    const elsewhere = await signed({ job: shop.app.ids.next() });
    expect(await push([elsewhere])).toMatchObject([{ verdict: 'waiting', code: 'job-unknown' }]);
    const { supervisor } = shop.people;
    await push([good]);
    const ended = { reason: 'The customer wants it back.', open: [], notToBeRun: true };
    await tablet.sync();
    await tablet.record(job.id, { kind: 'ended-unfinished', data: ended }, { by: supervisor });
    await tablet.sync();
    await tablet.record(
      job.id,
      { kind: 'deviation-raised', data: { class: 'C', words: 'too late', blocks: false } },
      { by: shop.people.ann, force: true },
    );
    expect(await push(tablet.held(job.id).outbox)).toMatchObject([{ verdict: 'refused', code: 'ended' }]);
    const [kept] = await refusedRows();
    expect(kept?.body).toContain('too late');
  });
});

describe('a tablet that has no part in a closed job', () => {
  it('gets none of it, and leaves no trace in it by asking', async () => {
    const ended = { reason: 'The customer wants it back.', open: [], notToBeRun: true };
    await tablet.sync();
    await tablet.record(job.id, { kind: 'ended-unfinished', data: ended }, { by: shop.people.supervisor });
    await tablet.sync();
    const other = await enrolTestTablet(shop, [shop.people.ben]);
    const before = await trailOf(shop.app, job.id);
    for (const have of [null, { seq: 1, hash: 'e'.repeat(64) }]) {
      const body = {
        device: other.device,
        sentAt: '2031-05-06T07:00:00Z',
        jobs: [{ id: job.id, have }],
        entries: [],
      };
      const answer = await ask(postSync, { tablet: other.credential, body });
      expect(answer.body).toMatchObject({ jobs: [{ id: job.id, entries: [], head: null, gone: true }] });
    }
    expect(await trailOf(shop.app, job.id)).toHaveLength(before.length);
  });
});
