import { beforeEach, describe, expect, it, vi } from 'vitest';
import { POST as postSync } from '@/pages/api/sync/index';
import type { Entry } from '@/domain/entry';
import { revokeKey } from '@/server/author-keys';
import { HOUR, MINUTE } from '@/server/clock';
import { setActive } from '@/server/people';
import type { PushBody, PushedEntry } from '@db/scripted-tablet';
import type { ScriptedEntry } from '@db/scripted-work';
import {
  ask,
  enrolTestTablet,
  type OpenedJob,
  openShop,
  openTestJob,
  pushTo,
  setClocks,
  type Shop,
  type TestTablet,
  trailOf,
} from '../support/tablet';

// A whole workshop and its jobs are made for each of these; a busy machine takes its time.
vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

let shop: Shop;
let tablet: TestTablet;
let job: OpenedJob;

beforeEach(async () => {
  shop = await openShop();
  const { supervisor, ann, ben } = shop.people;
  tablet = await enrolTestTablet(shop, [supervisor, ann, ben]);
  job = await openTestJob(tablet, supervisor);
});

const remark = (words: string) =>
  ({ kind: 'deviation-raised', data: { class: 'C', words, blocks: false } }) satisfies Partial<ScriptedEntry>;

const onStep = (kind: ScriptedEntry['kind'], step: string, data: object) =>
  ({ kind, step, data }) as Omit<ScriptedEntry, 'part' | 'afterMs'>;

const raise = (words: string, options: { force?: boolean; change?: (entry: Entry) => Entry } = {}) =>
  tablet.record(job.id, remark(words), { by: shop.people.ann, ...options });

/** Makes an entry that cannot be read. */
const nobody = (entry: Entry) => ({ ...entry, with: 'nobody' }) as unknown as Entry;

/** A push of exactly these, past the tablet's own outbox. */
function bodyOf(entries: unknown[], over: Partial<PushBody> = {}): PushBody {
  const sentAt = new Date(tablet.now).toISOString();
  return { device: tablet.device, sentAt, jobs: [], entries: entries as PushedEntry[], ...over };
}

const push = async (entries: unknown[], from: TestTablet = tablet) =>
  (await pushTo(from.credential, bodyOf(entries, { device: from.device }))).verdicts;

const outbox = () => [...tablet.held(job.id).outbox];

const refusedRows = () => shop.app.db.selectFrom('refused_entry').selectAll().orderBy('at').execute();

describe('a push', () => {
  it('records what is in order, and brings it back in its place', async () => {
    await raise('one');
    await raise('two');
    const verdicts = await tablet.sync();
    expect(verdicts.map(({ verdict }) => verdict)).toEqual(['recorded', 'recorded']);
    const rows = await trailOf(shop.app, job.id);
    expect(rows.map(({ seq, kind }) => `${seq} ${kind}`)).toEqual([
      '1 opened',
      '2 deviation-raised',
      '3 deviation-raised',
    ]);
    expect(tablet.held(job.id)).toMatchObject({ have: { seq: 3 }, outbox: [] });
    expect(verdicts.map(({ seq, hash }) => ({ seq, hash }))).toEqual(
      rows.slice(1).map(({ seq, hash }) => ({ seq, hash })),
    );
  });

  it('that is repeated does no harm, and is answered with the same places', async () => {
    await raise('one');
    const sent = outbox();
    const first = await push(sent);
    const again = await push(sent);
    expect(again).toEqual(first.map((verdict) => ({ ...verdict, verdict: 'already recorded' })));
    expect(await trailOf(shop.app, job.id)).toHaveLength(2);
  });

  it('with one entry twice records it once', async () => {
    await raise('one');
    const [one] = outbox();
    expect((await push([one, one])).map(({ verdict }) => verdict)).toEqual(['recorded', 'already recorded']);
  });

  it('takes entries that come out of order in their order, and lets a gap wait', async () => {
    for (const words of ['one', 'two', 'three', 'four']) await raise(words);
    const [one, two, three, four] = outbox();
    expect(await push([four])).toMatchObject([{ verdict: 'waiting', code: 'earlier-missing' }]);
    expect(await trailOf(shop.app, job.id)).toHaveLength(1);
    const verdicts = await push([four, two, one]);
    expect(verdicts.map(({ verdict }) => verdict)).toEqual(['waiting', 'recorded', 'recorded']);
    expect((await push([three, four])).map(({ verdict }) => verdict)).toEqual(['recorded', 'recorded']);
    const rows = await trailOf(shop.app, job.id);
    expect(rows.map(({ device_seq }) => device_seq)).toEqual([1, 2, 3, 4, 5]);
  });

  it('notes how far the tablet’s clock is off, and refuses nothing for it', async () => {
    tablet.now += 3 * HOUR;
    await raise('from the future');
    const [row] = outbox();
    const answer = await pushTo(tablet.credential, bodyOf([row]));
    expect(answer).toMatchObject({ verdicts: [{ verdict: 'recorded' }], clockOffsetMs: 3 * HOUR + 5000 });
    const rows = await trailOf(shop.app, job.id);
    expect(JSON.parse(rows[1]!.body)).toMatchObject({ clockOffsetMs: 3 * HOUR + 5000 });
  });

  it('for a job that the server does not hold waits', async () => {
    await raise('one', { change: (entry) => ({ ...entry, job: shop.app.ids.next() }) });
    expect(await push(outbox())).toMatchObject([{ verdict: 'waiting', code: 'job-unknown' }]);
  });
});

describe('a malformed entry', () => {
  it('is refused and kept whole, and the good ones beside it go in', async () => {
    await raise('one');
    await raise('two', {
      change: (entry) => ({ ...entry, data: { ...entry.data, colour: 'red' } }) as Entry,
    });
    await raise('three');
    const verdicts = await push([...outbox(), { nonsense: true }, 'text', null]);
    expect(verdicts.map(({ verdict, code }) => `${verdict} ${code ?? ''}`.trim())).toEqual([
      'recorded',
      'refused malformed',
      'recorded',
      'refused malformed',
      'refused malformed',
      'refused malformed',
    ]);
    const [kept] = await refusedRows();
    expect(JSON.parse(kept!.body)).toMatchObject({ entry: { data: { words: 'two', colour: 'red' } } });
    expect(kept!.body).not.toContain('sealed');
  });

  it('enters the trail with its content hash and the reason', async () => {
    await raise('one', { change: (entry) => ({ ...entry, at: '2031-13-45T00:00:00Z' }) });
    await push(outbox());
    const [, refusal] = await trailOf(shop.app, job.id);
    const [kept] = await refusedRows();
    expect(JSON.parse(refusal!.body)).toMatchObject({
      kind: 'refused',
      by: 'workshop',
      device: 'server',
      deviceSeq: 1,
      data: { content: kept!.content_hash, code: 'malformed', author: shop.people.ann.id },
    });
    expect(refusal).toMatchObject({ signature: null, by_person: null });
  });

  it('gets the same verdict again and is kept once', async () => {
    await raise('one', { change: (entry) => ({ ...entry, v: 0 }) as unknown as Entry });
    const first = await push(outbox());
    expect(await push(outbox())).toEqual(first);
    expect(await refusedRows()).toHaveLength(1);
  });

  it('uses its number up, so that the next one need not wait', async () => {
    await raise('one', { force: true, change: nobody });
    await raise('two');
    expect((await push(outbox())).map(({ verdict }) => verdict)).toEqual(['refused', 'recorded']);
  });

  it('ahead of its turn holds nothing up once its turn has come', async () => {
    await raise('one');
    await raise('two', { force: true, change: nobody });
    await raise('three');
    const [one, two, three] = outbox();
    expect((await push([two, three])).map(({ verdict }) => verdict)).toEqual(['refused', 'waiting']);
    expect((await push([one, three])).map(({ verdict }) => verdict)).toEqual(['recorded', 'recorded']);
  });

  it('that cannot be hashed is refused as well: not NFC, half a character, a fraction, nested without end', async () => {
    await raise('ok');
    const [good] = outbox();
    const entry = good!.entry;
    const bad = [
      { ...entry, id: shop.app.ids.next(), data: { ...entry.data, words: 'e\u0301' } },
      { ...entry, id: shop.app.ids.next(), data: { ...entry.data, words: 'half \ud800' } },
      { ...entry, id: shop.app.ids.next(), basis: 1.5 },
      { ...entry, id: shop.app.ids.next(), data: 'DEEP' },
    ];
    const body = JSON.stringify(bodyOf([...bad.map((one) => ({ ...good, entry: one })), good]));
    const deep = `${'['.repeat(20_000)}${']'.repeat(20_000)}`;
    const answer = await ask(postSync, { tablet: tablet.credential, body: body.replace('"DEEP"', deep) });
    const { verdicts } = answer.body as { verdicts: { verdict: string }[] };
    expect(verdicts.map(({ verdict }) => verdict)).toEqual([
      'refused',
      'refused',
      'refused',
      'refused',
      'recorded',
    ]);
    expect((await refusedRows())[3]!.body).toContain('[[[[');
  });

  it('of a newer kind than the server knows waits', async () => {
    await raise('one', { change: (entry) => ({ ...entry, v: 2 }) as unknown as Entry });
    expect(await push(outbox())).toMatchObject([{ verdict: 'waiting', code: 'server-older' }]);
    expect(await refusedRows()).toEqual([]);
  });
});

describe('an id', () => {
  it('is taken by the first content that came under it', async () => {
    const entry = await raise('one');
    await push(outbox());
    const other = await tablet.signed(
      { ...entry, deviceSeq: 3, data: { ...entry.data, words: 'else' } } as Entry,
      {
        by: shop.people.ann,
      },
    );
    expect(await push([other])).toMatchObject([{ verdict: 'refused', code: 'id-taken' }]);
    expect(await push(outbox())).toMatchObject([{ verdict: 'already recorded' }]);
  });

  it('that was refused stays refused, whatever comes under it later', async () => {
    const entry = await raise('one', { change: (made) => ({ ...made, plan: 'f'.repeat(64) }) });
    expect(await push(outbox())).toMatchObject([{ verdict: 'refused', code: 'plan-unknown' }]);
    const mended = await tablet.signed(
      { ...entry, plan: job.planHash, deviceSeq: 3 },
      { by: shop.people.ann },
    );
    expect(await push([mended])).toMatchObject([{ verdict: 'refused', code: 'id-taken' }]);
  });
});

describe('an author', () => {
  it('is proved by the key of that person on that tablet, and by nothing else', async () => {
    const { ann, ben } = shop.people;
    const other = await enrolTestTablet(shop, [ann]);
    const entry = await raise('forged');
    const [good] = outbox();
    const asBen = await tablet.signed(entry, { by: ben });
    const elsewhere = await other.signed(entry, { by: ann });
    const cases: [PushedEntry, string][] = [
      [{ ...good!, key: 'f'.repeat(16) }, 'key-unknown'],
      [asBen, 'key-foreign'],
      [{ ...good!, signature: asBen.signature }, 'signature-wrong'],
      [elsewhere, 'key-foreign'],
    ];
    for (const [index, [pushed, code]] of cases.entries()) {
      const id = shop.app.ids.next();
      const renamed = { ...pushed, entry: { ...pushed.entry, id, deviceSeq: 2 + index } };
      const resigned =
        code === 'key-foreign'
          ? await (pushed === elsewhere ? other : tablet).signed(renamed.entry, {
              by: pushed === asBen ? ben : ann,
            })
          : renamed;
      expect(await push([resigned]), code).toMatchObject([{ verdict: 'refused', code }]);
    }
  });

  it('cannot be put on an entry by changing it after it was signed', async () => {
    await raise('mine');
    const [good] = outbox();
    const changed = { ...good!, entry: { ...good!.entry, by: shop.people.ben.id } };
    expect(await push([changed])).toMatchObject([{ verdict: 'refused', code: 'key-foreign' }]);
    expect((await trailOf(shop.app, job.id)).map(({ by_person }) => by_person)).not.toContain(
      shop.people.ben.id,
    );
  });

  it('needs no session, and counts as who they were when the work was done', async () => {
    const { ann, owner } = shop.people;
    await raise('before');
    const before = outbox();
    shop.app.clock.advance(10 * MINUTE);
    await shop.app.db.transaction().execute((trx) => setActive(trx, owner, ann.id, false, shop.app));
    shop.app.clock.advance(2 * HOUR);
    tablet.now += 2 * HOUR + 10 * MINUTE;
    expect(await push(before)).toMatchObject([{ verdict: 'recorded' }]);
    const rows = await trailOf(shop.app, job.id);
    expect(JSON.parse(rows[1]!.body)).not.toHaveProperty('conflict');
  });

  it('who was deactivated unknown to the tablet is recorded with a conflict, which blocks', async () => {
    const { ann, owner } = shop.people;
    await shop.app.db.transaction().execute((trx) => setActive(trx, owner, ann.id, false, shop.app));
    shop.app.clock.advance(HOUR);
    tablet.now += HOUR;
    await tablet.record(job.id, onStep('counted', 'strip.rags-out', { count: 12 }), { by: ann });
    expect(await push(outbox())).toMatchObject([{ verdict: 'recorded', code: 'inactive-person' }]);
    const rows = await trailOf(shop.app, job.id);
    expect(JSON.parse(rows[1]!.body)).toMatchObject({ conflict: { code: 'inactive-person' } });
  });

  it('with a revoked key is still taken for what was made before, and not for what the tablet knew of', async () => {
    const { ann } = shop.people;
    await raise('before');
    const [before] = outbox();
    shop.app.clock.advance(10 * MINUTE);
    await shop.app.db.transaction().execute((trx) => revokeKey(trx, ann, before!.key, shop.app));
    tablet.now += HOUR;
    shop.app.clock.advance(HOUR);
    const known = tablet.workshop.seq + 100;
    await raise('after, knowing', { change: (entry) => ({ ...entry, workshop: known }) });
    const [, after] = outbox();
    expect(await push([before, after])).toMatchObject([
      { verdict: 'recorded' },
      { verdict: 'refused', code: 'key-revoked' },
    ]);
  });

  it('may not claim another name or other roles than the workshop has', async () => {
    await raise('as supervisor', {
      change: (entry) => ({ ...entry, author: { ...entry.author, roles: ['technician', 'supervisor'] } }),
    });
    expect(await push(outbox())).toMatchObject([{ verdict: 'refused', code: 'author-differs' }]);
  });
});

describe('the server’s own kinds', () => {
  it('are refused from a tablet', async () => {
    const data = { content: 'a'.repeat(64), code: 'x', reason: 'y' };
    await tablet.record(job.id, { kind: 'refused', data }, { by: shop.people.ann, force: true });
    expect(await push(outbox())).toMatchObject([{ verdict: 'refused', code: 'office-kind' }]);
  });
});

describe('what the tablet saw', () => {
  const rags = onStep('counted', 'strip.rags-out', { count: 12 });

  it('decides: an act that its own tablet forbade is refused', async () => {
    await tablet.record(job.id, onStep('removed', 'strip.sump-off', {}), {
      by: shop.people.ann,
      force: true,
    });
    expect(await push(outbox())).toMatchObject([{ verdict: 'refused', code: 'order' }]);
  });

  it('decides: what was in order there is recorded with a conflict if somebody else was first', async () => {
    const { ann, ben } = shop.people;
    const other = await enrolTestTablet(shop, [ben]);
    other.takeUp(job.id, job.plan);
    await other.sync();
    await tablet.record(job.id, rags, { by: ann });
    await other.record(job.id, rags, { by: ben });
    await other.sync();
    const [verdict] = await tablet.sync();
    expect(verdict).toMatchObject({ verdict: 'recorded', code: 'already-done' });
    const state = tablet.held(job.id).confirmed;
    expect(state.deviations).toMatchObject([{ rule: 'conflict', step: 'strip.rags-out', blocks: true }]);
    expect(state.steps['strip.rags-out']?.entries).toHaveLength(2);
  });

  it('holds for all that was done after it, in the same push and in later ones', async () => {
    const { ann, ben } = shop.people;
    const other = await enrolTestTablet(shop, [ben]);
    other.takeUp(job.id, job.plan);
    await other.sync();
    await other.record(job.id, rags, { by: ben });
    await other.sync();
    for (const entry of [rags, onStep('fitted', 'strip.old-shell-kit', { count: 8, lot: 'K-1' })])
      await tablet.record(job.id, entry, { by: ann });
    const [first, second] = outbox();
    expect(await push([first])).toMatchObject([{ verdict: 'recorded', code: 'already-done' }]);
    const [clean] = await push([second]);
    expect(clean).toMatchObject({ verdict: 'recorded' });
    expect(clean).not.toHaveProperty('code');
  });

  it('does not save an entry that another tablet’s work alone would have allowed', async () => {
    const { ann, ben } = shop.people;
    const other = await enrolTestTablet(shop, [ben]);
    other.takeUp(job.id, job.plan);
    await other.sync();
    await other.perform(job.id, { technician: ben, supervisor: ben }, shop.kit, { step: 'strip.strap' });
    await other.sync();
    // Made before the vehicle was raised by anybody whom this tablet had heard of.
    await tablet.record(job.id, onStep('placed', 'strip.strap', {}), { by: ann, force: true });
    expect(await push(outbox())).toMatchObject([{ verdict: 'refused', code: 'order' }]);
  });
});

describe('a number used twice', () => {
  it('with other content is recorded as a conflict: the tablet was copied', async () => {
    const first = await raise('one');
    await push(outbox());
    const twin = await tablet.signed(
      { ...first, id: shop.app.ids.next(), data: { ...first.data, words: 'from the copy' } } as Entry,
      { by: shop.people.ann },
    );
    expect(await push([twin])).toMatchObject([{ verdict: 'recorded', code: 'number-used-twice' }]);
  });
});

describe('a tablet’s pull', () => {
  it('brings what others recorded, page by page', async () => {
    const { ann, ben } = shop.people;
    for (let n = 0; n < 620; n += 1) await raise(`remark ${n}`);
    await tablet.sync();
    const other = await enrolTestTablet(shop, [ann, ben]);
    other.takeUp(job.id, job.plan);
    const first = await pushTo(
      other.credential,
      bodyOf([], { device: other.device, jobs: [{ id: job.id, have: null }] }),
    );
    expect(first.jobs[0]).toMatchObject({ more: true, head: { seq: 621 } });
    expect(first.jobs[0]!.entries).toHaveLength(500);
    await other.sync();
    expect(other.held(job.id).have).toEqual(tablet.held(job.id).have);
    expect(other.held(job.id).state.count).toBe(621);
  });

  it('of a job that is not there says that it is gone', async () => {
    const id = shop.app.ids.next();
    const answer = await pushTo(tablet.credential, bodyOf([], { jobs: [{ id, have: null }] }));
    expect(answer.jobs).toEqual([{ id, entries: [], more: false, head: null, gone: true }]);
  });

  it('by a tablet that holds more than the server brings all from the start, and the trail notes it once', async () => {
    const have = { seq: 40, hash: 'e'.repeat(64) };
    const body = bodyOf([], { jobs: [{ id: job.id, have }] });
    const answer = await pushTo(tablet.credential, body);
    expect(answer.jobs[0]).toMatchObject({ restored: true, head: { seq: 2 } });
    expect(answer.jobs[0]!.entries.map(({ recorded }) => recorded.kind)).toEqual(['opened', 'restored']);
    await pushTo(tablet.credential, body);
    expect(await trailOf(shop.app, job.id)).toHaveLength(2);
  });
});

describe('a restored server', () => {
  it('takes back from any tablet what another one had made, under its true author', async () => {
    const { ann, ben } = shop.people;
    const other = await enrolTestTablet(shop, [ben]);
    other.takeUp(job.id, job.plan);
    await other.sync();
    await other.record(job.id, remark('by ben'), { by: ben });
    const lost = [...other.held(job.id).outbox];
    await raise('by ann');
    // Ben's tablet never came back; Ann's had his entry as confirmed and puts it back.
    expect(await push([...lost, ...outbox()])).toMatchObject([
      { verdict: 'recorded' },
      { verdict: 'recorded' },
    ]);
    const rows = await trailOf(shop.app, job.id);
    expect(rows.slice(1).map(({ by_person, device_id }) => [by_person, device_id])).toEqual([
      [ben.id, other.device],
      [ann.id, tablet.device],
    ]);
  });
});

describe('the envelope', () => {
  const send = (body: unknown) => ask(postSync, { tablet: tablet.credential, body });

  it.each([
    ['device', { device: 'not an id' }],
    ['sentAt', { sentAt: 'yesterday' }],
    ['jobs.0.id', { jobs: [{ id: 7, have: null }] }],
    [
      'jobs.0.have.hash',
      { jobs: [{ id: '01970000-0000-7000-8000-000000000001', have: { seq: 1, hash: 'x' } }] },
    ],
    ['entries', { entries: 'none' }],
    ['colour', { colour: 'red' }],
  ])('is answered 400 naming %s', async (field, over) => {
    const answer = await send({ ...bodyOf([]), ...over });
    expect(answer).toMatchObject({ status: 400, body: { error: { code: 'invalid-field', field } } });
  });

  it('is answered 400 for another tablet’s name and for more than 200 entries', async () => {
    const foreign = await send(bodyOf([], { device: shop.app.ids.next() }));
    expect(foreign).toMatchObject({ status: 400, body: { error: { field: 'device' } } });
    const many = await send(bodyOf(Array.from({ length: 201 }, () => ({}))));
    expect(many).toMatchObject({ status: 400, body: { error: { field: 'entries' } } });
  });

  it('needs the tablet’s credential, JSON, and less than 512 kB', async () => {
    expect(await ask(postSync, { body: bodyOf([]) })).toMatchObject({ status: 401 });
    expect(await ask(postSync, { as: shop.people.ann, body: bodyOf([]) })).toMatchObject({ status: 401 });
    const forged = `${tablet.device}.${'A'.repeat(43)}`;
    expect(await ask(postSync, { tablet: forged, body: bodyOf([]) })).toMatchObject({ status: 401 });
    const text = await ask(postSync, {
      tablet: tablet.credential,
      body: '{}',
      headers: { 'content-type': 'text/plain' },
    });
    expect(text).toMatchObject({ status: 415 });
    expect(await send(bodyOf([{ entry: 'x'.repeat(600_000) }]))).toMatchObject({ status: 413 });
    expect(await send('{')).toMatchObject({ status: 400, body: { error: { code: 'invalid-json' } } });
  });
});

describe('the table of entries', () => {
  it('refuses to change, to delete, to skip a number and to put one in', async () => {
    await raise('one');
    await tablet.sync();
    const { db } = shop.app;
    await expect(
      db
        .updateTable('job_entry')
        .set({ kind: 'done' } as never)
        .execute(),
    ).rejects.toThrow('never changed');
    await expect(db.deleteFrom('job_entry').execute()).rejects.toThrow('never deleted');
    const [row] = await trailOf(shop.app, job.id);
    const made = { ...row!, id: 'x', hash: 'y' };
    await expect(
      db
        .insertInto('job_entry')
        .values({ ...made, seq: 9 })
        .execute(),
    ).rejects.toThrow('no gaps');
    await expect(db.replaceInto('job_entry').values(row!).execute()).rejects.toThrow();
    await expect(db.deleteFrom('refused_entry').execute()).resolves.toBeDefined();
    await push([{ nonsense: true }]);
    await expect(db.deleteFrom('refused_entry').execute()).rejects.toThrow('kept as it came');
  });
});

describe('a fold', () => {
  it('that is kept in memory equals the one folded anew from the entries', async () => {
    const { ann, supervisor } = shop.people;
    await tablet.perform(job.id, { technician: ann, supervisor }, shop.kit, { entries: 60 });
    setClocks(tablet);
    await tablet.sync();
    expect(tablet.held(job.id).confirmed).toEqual(tablet.held(job.id).state);
    const { getFold } = await import('@/server/job-fold');
    const kept = await getFold(shop.app.db, job.id);
    const afresh = await getFold({ ...shop.app }.db.withoutPlugins(), job.id);
    expect(afresh).not.toBe(kept);
    expect(afresh).toEqual(kept);
  });
});
