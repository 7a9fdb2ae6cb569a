import { createHash } from 'node:crypto';
import { beforeEach, describe, expect, it, vi } from 'vitest';
import sharp from 'sharp';
import { PATCH as patchDevice } from '@/pages/api/devices/[id]';
import { POST as postFile } from '@/pages/api/devices/file';
import { PUT as putPhoto } from '@/pages/api/photos/[hash]';
import { workshopLines, type WorkshopRecord } from '@/domain/workshop-words';
import { getFold } from '@/server/job-fold';
import { setActive } from '@/server/people';
import type { PushedEntry } from '@db/scripted-tablet';
import type { ScriptedEntry } from '@db/scripted-work';
import {
  ask,
  enrolTestTablet,
  type Hand,
  type OpenedJob,
  openShop,
  openTestJob,
  setClocks,
  type Shop,
  type TestTablet,
  trailOf,
} from '../support/tablet';

// A whole workshop and its jobs are made for each of these; a busy machine takes its time.
vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

const HOLD = 'build.caps-marked';

let shop: Shop;
let tablet: TestTablet;
let job: OpenedJob;

beforeEach(async () => {
  shop = await openShop();
  const { supervisor, lead, ann, ben } = shop.people;
  tablet = await enrolTestTablet(shop, [supervisor, lead, ann, ben]);
  job = await openTestJob(tablet, supervisor);
});

const remark = (words: string) =>
  ({ kind: 'deviation-raised', data: { class: 'C', words, blocks: false } }) satisfies Partial<ScriptedEntry>;

const raise = (words: string) => tablet.record(job.id, remark(words), { by: shop.people.ann });

/** What the tablet would save, with its outbox as it is. */
const fileOf = (entries: unknown[] = [...tablet.held(job.id).outbox], over: object = {}) => ({
  v: 1,
  format: 'witnessmark-tablet',
  tablet: tablet.device,
  savedAt: new Date(tablet.now).toISOString(),
  clockOffsetMs: 0,
  entries,
  ...over,
});

interface Answer {
  tablet: string;
  verdicts: { verdict: string; code?: string; reason?: string; words: string; by?: string; job?: string }[];
}

async function bringIn(body: unknown, as: Hand = shop.people.supervisor): Promise<Answer> {
  const answer = await ask(postFile, { as, body });
  expect(answer.status, answer.text).toBe(200);
  return answer.body as Answer;
}

async function told(): Promise<string[]> {
  const rows = await shop.app.db.selectFrom('workshop_entry').select('body').orderBy('seq').execute();
  return workshopLines(rows.map(({ body }) => JSON.parse(body) as WorkshopRecord))
    .filter(({ words }) => words.startsWith('File of tablet'))
    .map(({ who, words }) => `${who}: ${words}`);
}

describe('a tablet’s file', () => {
  it('is judged exactly as a push of the tablet, though that is gone and its authors with it', async () => {
    const { ann, ben, lead, supervisor, owner } = shop.people;
    await tablet.perform(job.id, { technician: ann, supervisor: lead }, shop.kit, { step: HOLD });
    await tablet.sign(job.id, HOLD, { by: supervisor });
    await tablet.record(job.id, remark('after it'), { by: ben });
    setClocks(tablet);
    const made = tablet.held(job.id).outbox.map(({ entry }) => entry.id);
    await ask(patchDevice, {
      method: 'PATCH',
      as: owner,
      params: { id: tablet.device },
      body: { state: 'lost', reason: 'fell into the pit' },
    });
    await shop.app.db.transaction().execute((trx) => setActive(trx, owner, ann.id, false, shop.app));
    const { verdicts } = await bringIn(fileOf());
    expect(verdicts.filter(({ verdict, code }) => verdict !== 'recorded' || code !== undefined)).toEqual([]);
    const rows = await trailOf(shop.app, job.id);
    const own = rows.filter(({ device_id, seq }) => device_id === tablet.device && seq > 1);
    expect(own.map(({ id }) => id)).toEqual(made);
    const { state } = await getFold(shop.app.db, job.id);
    expect(state.signatures).toMatchObject([{ step: HOLD, checkedAt: expect.any(String) }]);
  });

  it('says of each record in words what it is, whose, and what became of it', async () => {
    await raise('one');
    await raise('two');
    const outbox = [...tablet.held(job.id).outbox];
    const spoilt = { ...outbox[1]!, signature: 'A'.repeat(86) };
    const { verdicts, tablet: name } = await bringIn(fileOf([outbox[0]!, spoilt, 'nonsense']));
    expect(name).toMatch(/^Tablet /);
    expect(verdicts).toMatchObject([
      { verdict: 'recorded', words: 'Deviation, class C: one', by: shop.people.ann.name, job: job.number },
      {
        verdict: 'refused',
        code: 'signature-wrong',
        reason: "The author's signature does not fit what is written.",
      },
      { verdict: 'refused', code: 'malformed', words: 'A record that could not be read' },
    ]);
  });

  it('again does no harm, and is told once in the workshop’s trail with who brought it', async () => {
    await raise('one');
    const file = fileOf();
    await bringIn(file);
    expect((await bringIn(file)).verdicts).toMatchObject([{ verdict: 'already recorded' }]);
    expect(await trailOf(shop.app, job.id)).toHaveLength(2);
    const name = `Tablet ${tablet.device.slice(-2)}`;
    expect(await told()).toEqual([
      `${shop.people.supervisor.name}: File of tablet ${name} brought in: 1 recorded, 0 refused`,
    ]);
    expect(await tablet.sync()).toMatchObject([{ verdict: 'already recorded' }]);
  });

  it('puts its records in their order, whatever order they stand in', async () => {
    for (const words of ['one', 'two', 'three']) await raise(words);
    const { verdicts } = await bringIn(fileOf([...tablet.held(job.id).outbox].reverse()));
    expect(verdicts.map(({ words, verdict }) => `${words} ${verdict}`)).toEqual([
      'Deviation, class C: one recorded',
      'Deviation, class C: two recorded',
      'Deviation, class C: three recorded',
    ]);
  });

  it('with a gap waits as long as the tablet may still send, and is taken without it once that is lost', async () => {
    for (const words of ['one', 'two', 'three', 'four']) await raise(words);
    const [one, two, three, four] = [...tablet.held(job.id).outbox] as [
      PushedEntry,
      PushedEntry,
      PushedEntry,
      PushedEntry,
    ];
    const file = fileOf([one, three, four]);
    expect((await bringIn(file)).verdicts.map(({ verdict }) => verdict)).toEqual([
      'recorded',
      'waiting',
      'waiting',
    ]);
    await ask(patchDevice, {
      method: 'PATCH',
      as: shop.people.supervisor,
      params: { id: tablet.device },
      body: { state: 'lost', reason: 'its screen is black' },
    });
    const { verdicts } = await bringIn(file);
    expect(verdicts.map(({ verdict, code }) => `${verdict} ${code ?? ''}`.trim())).toEqual([
      'already recorded',
      'recorded',
      'recorded',
    ]);
    // What was missing turns up after all: it happened, and it says that it came late.
    const late = (await bringIn(fileOf([two]))).verdicts[0];
    expect(late).toMatchObject({ verdict: 'recorded', code: 'late' });
    expect(late?.reason).toContain('came late: the tablet was declared lost');
    const { state } = await getFold(shop.app.db, job.id);
    expect(state.deviations.at(-1)).toMatchObject({ rule: 'conflict', blocks: true });
  });

  it('in which the PIN was wrong is refused as it would have been', async () => {
    const { ann, lead, supervisor } = shop.people;
    await tablet.perform(job.id, { technician: ann, supervisor: lead }, shop.kit, { step: HOLD });
    await tablet.sign(job.id, HOLD, { by: supervisor, pin: '111222' });
    setClocks(tablet);
    const { verdicts } = await bringIn(fileOf());
    expect(verdicts.at(-1)).toMatchObject({ verdict: 'refused', code: 'pin-wrong' });
    expect(await shop.app.db.selectFrom('pin_attempt').selectAll().execute()).toHaveLength(1);
  });

  it('has its photographs kept by whoever brings it in, so that a handover need not wait for them', async () => {
    const photo = await sharp({ create: { width: 60, height: 40, channels: 3, background: '#784828' } })
      .jpeg()
      .toBuffer();
    const hash = createHash('sha256').update(photo).digest('hex');
    const params = { hash };
    const sent = { method: 'PUT', params, body: photo, headers: { 'content-type': 'image/jpeg' } };
    expect((await ask(putPhoto, { ...sent, as: shop.people.supervisor })).status).toBe(201);
    expect((await ask(putPhoto, { ...sent, as: shop.people.supervisor })).status).toBe(200);
  });
});

describe('bringing a file in', () => {
  it('is for supervisors and the owner', async () => {
    await raise('one');
    const { ann, lead, auditor, owner } = shop.people;
    for (const as of [ann, lead, auditor])
      expect((await ask(postFile, { as, body: fileOf() })).status).toBe(403);
    expect((await ask(postFile, { body: fileOf() })).status).toBe(401);
    expect(await trailOf(shop.app, job.id)).toHaveLength(1);
    expect((await bringIn(fileOf(), owner)).verdicts).toMatchObject([{ verdict: 'recorded' }]);
  });

  it.each([
    ['v', { v: 2 }],
    ['format', { format: 'something else' }],
    ['tablet', { tablet: 'bay two' }],
    ['savedAt', { savedAt: 'yesterday' }],
    ['clockOffsetMs', { clockOffsetMs: 0.5 }],
    ['entries', { entries: [] }],
    ['entries', { entries: Array(201).fill({}) }],
    ['entries', { entries: 'none' }],
    ['photographs', { photographs: [] }],
  ])('that is damaged is answered 400 naming %s', async (field, over) => {
    const answer = await ask(postFile, { as: shop.people.supervisor, body: fileOf([{}], over) });
    expect(answer).toMatchObject({ status: 400, body: { error: { code: 'invalid-field', field } } });
  });

  it('of a tablet that the workshop never had is answered 404, and nothing is kept', async () => {
    await raise('one');
    const body = fileOf(undefined, { tablet: shop.app.ids.next() });
    expect(await ask(postFile, { as: shop.people.supervisor, body })).toMatchObject({
      status: 404,
      body: { error: { message: expect.stringContaining('The tablet that this file is of') } },
    });
    expect(await shop.app.db.selectFrom('refused_entry').selectAll().execute()).toEqual([]);
  });

  it('proves nothing about authors: what is signed by no known key is refused', async () => {
    await raise('one');
    const [one] = [...tablet.held(job.id).outbox];
    const { verdicts } = await bringIn(fileOf([{ ...one, key: 'f'.repeat(16) }]));
    expect(verdicts).toMatchObject([{ verdict: 'refused', code: 'key-unknown' }]);
  });
});
