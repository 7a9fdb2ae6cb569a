import { beforeEach, describe, expect, it, vi } from 'vitest';
import { GET as getDevices } from '@/pages/api/devices/index';
import { GET as getSetAside } from '@/pages/api/jobs/[id]/set-aside';
import { GET as getKeys } from '@/pages/api/keys/index';
import { GET as getPeople } from '@/pages/api/people/index';
import { GET as getTools } from '@/pages/api/tools/index';
import { THE_WORKSHOP } from '@/server/actor';
import { enrolDevice } from '@/server/devices';
import type { HandlerContext } from '@/server/http';
import { addPerson } from '@/server/people';
import { getPlanText, listRoutes } from '@/server/plans';
import { readTools } from '@/server/tool-rows';
import { addTool, getTool, listTools } from '@/server/tools';
import { getWorkshopView } from '@/server/workshop';
import type { ScriptedEntry } from '@db/scripted-work';
import {
  ask,
  enrolTestTablet,
  type Hand,
  openShop,
  openTestJob,
  pushTo,
  type Shop,
  type TestTablet,
} from '../support/tablet';

vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

let shop: Shop;

beforeEach(async () => {
  shop = await openShop();
});

type Handler = (context: HandlerContext) => Promise<Response>;

/** Every page of a list, as somebody who follows its cursors reads it. */
async function readPages(
  handler: Handler,
  key: string,
  as: Hand,
  params?: Record<string, string>,
): Promise<{ id: string }[][]> {
  const pages: { id: string }[][] = [];
  let query = '';
  do {
    const { status, body } = await ask(handler, { as, query, ...(params === undefined ? {} : { params }) });
    expect(status).toBe(200);
    const page = body as Record<string, { id: string }[]> & { cursor?: string };
    pages.push(page[key]!);
    query = page.cursor === undefined ? '' : `?cursor=${encodeURIComponent(page.cursor)}`;
  } while (query !== '' && pages.length < 20);
  return pages;
}

function expectWhole(pages: { id: string }[][], ids: string[]): void {
  expect(pages.slice(0, -1).every((page) => page.length === 50)).toBe(true);
  const given = pages.flat().map(({ id }) => id);
  expect(new Set(given).size).toBe(given.length);
  expect([...given].sort()).toEqual([...ids].sort());
}

const idsOf = async (table: 'person' | 'device' | 'author_key' | 'tool') =>
  (await shop.app.db.selectFrom(table).select('id').execute()).map(({ id }) => id);

describe('a long list', () => {
  it('of people is whole and has nobody twice, also where names are alike and odd', async () => {
    const { owner } = shop.people;
    await shop.app.db.transaction().execute(async (trx) => {
      for (let n = 0; n < 110; n += 1) {
        const name = n % 3 === 0 ? 'Alike' : `Ünal ~ 100% "${n % 7}"`;
        const person = { name, email: `p${n}@witnessmark.example`, roles: ['technician'] as const };
        await addPerson(trx, owner, person, shop.app);
      }
    });
    const pages = await readPages(getPeople, 'people', owner);
    expectWhole(pages, await idsOf('person'));
    expect(pages).toHaveLength(3);
    const names = (pages.flat() as unknown as { name: string }[]).map(({ name }) => name);
    expect(names).toEqual([...names].sort());
  });

  it('of tablets and of keys is whole, the tablets the newest first', async () => {
    const { owner, ann } = shop.people;
    await enrolTestTablet(shop, [ann]);
    await shop.app.db.transaction().execute(async (trx) => {
      for (let n = 0; n < 60; n += 1) {
        if (n % 4 === 0) shop.app.clock.advance(1000);
        await enrolDevice(trx, owner, { id: shop.app.ids.next(), name: `Bay ${n}` }, shop.app);
      }
    });
    const [device] = await idsOf('device');
    for (let n = 0; n < 60; n += 1) {
      const at = new Date(shop.app.clock.now().getTime() + (n >> 1)).toISOString();
      const key = { id: `key${n}`, person_id: ann.id, device_id: device!, public_key: `p${n}` };
      await shop.app.db
        .insertInto('author_key')
        .values({ ...key, enrolled_at: at, workshop_seq: 1, revoked_at: null })
        .execute();
    }
    const devices = await readPages(getDevices, 'devices', owner);
    expectWhole(devices, await idsOf('device'));
    const enrolled = (devices.flat() as unknown as { enrolledAt: string }[]).map((one) => one.enrolledAt);
    expect(enrolled).toEqual([...enrolled].sort().reverse());
    expectWhole(await readPages(getKeys, 'keys', owner), await idsOf('author_key'));
    expectWhole(await readPages(getKeys, 'keys', ann), await idsOf('author_key'));
    expectWhole(await readPages(getKeys, 'keys', shop.people.ben), []);
  });

  it('of tools is whole', async () => {
    const { owner, ben } = shop.people;
    const facts = {
      kind: 'gauge',
      rangeLow: null,
      rangeHigh: null,
      unit: null,
      dueOn: null,
      cycleLimit: null,
    };
    await shop.app.db.transaction().execute(async (trx) => {
      for (let n = 0; n < 70; n += 1)
        await addTool(trx, owner, { ...facts, name: `Gauge ${n % 5}`, serial: `G-${n}` }, shop.app);
    });
    expectWhole(await readPages(getTools, 'tools', ben), await idsOf('tool'));
  });
});

describe('what was set aside in a job', () => {
  let tablet: TestTablet;
  let job: { id: string };

  beforeEach(async () => {
    const { supervisor, ann, ben } = shop.people;
    tablet = await enrolTestTablet(shop, [supervisor, ann, ben]);
    job = await openTestJob(tablet, supervisor);
  });

  const remark = (words: string) =>
    ({
      kind: 'deviation-raised',
      data: { class: 'C', words, blocks: false },
    }) satisfies Partial<ScriptedEntry>;

  /** A record that its own tablet forbids. */
  const raise = (by: Hand, words: string) =>
    tablet.record(
      job.id,
      { kind: 'placed', step: 'strip.strap', data: {} },
      {
        by,
        force: true,
        change: (entry) => ({ ...entry, afterwards: { when: '08:00', reason: words } }),
      },
    );

  const read = (as: Hand) => readPages(getSetAside, 'setAside', as, { id: job.id });

  it('is listed with who, what in words, when, why, and from which tablet', async () => {
    const { ann, supervisor } = shop.people;
    const entry = await raise(ann, 'forgotten');
    await tablet.sync();
    const [page] = await read(supervisor);
    expect(page).toEqual([
      {
        id: expect.any(String),
        words: expect.stringContaining('forgotten'),
        code: 'order',
        reason: expect.stringMatching(/first|order/),
        at: shop.app.clock.now().toISOString(),
        madeAt: entry.at,
        by: ann.name,
        tablet: `Tablet ${tablet.device.slice(-2)}`,
      },
    ]);
  });

  it('says of what could not be read, or not be proved, no more than is known', async () => {
    await tablet.record(job.id, remark('one'), { by: shop.people.ann });
    const [row] = tablet.held(job.id).outbox;
    const push = (entry: unknown) => {
      const entries = [entry] as never[];
      return pushTo(tablet.credential, {
        ...{ device: tablet.device, sentAt: new Date(tablet.now).toISOString(), jobs: [] },
        entries,
      });
    };
    await push({ ...row, entry: { ...row!.entry, colour: 'red', by: '<b>x</b>', device: 'x' } });
    await push({
      ...row,
      signature: `${row!.signature.slice(0, -4)}AAAA`,
      entry: { ...row!.entry, by: 'y' },
    });
    const [page] = await read(shop.people.supervisor);
    expect(page).toHaveLength(2);
    expect(page).toContainEqual(
      expect.objectContaining({ words: 'Something that could not be read', code: 'malformed' }),
    );
    for (const one of page!) expect(one).not.toHaveProperty('by');
  });

  it('is for those who see all; technicians read what is in their own name', async () => {
    const { ann, ben, auditor, lead, owner } = shop.people;
    await raise(ann, 'by ann');
    await raise(ben, 'by ben');
    await tablet.sync();
    for (const reader of [auditor, lead, owner]) expect((await read(reader)).flat()).toHaveLength(2);
    expect((await read(ann)).flat()).toMatchObject([{ by: ann.name }]);
    expect((await read(ben)).flat()).toMatchObject([{ by: ben.name }]);
    await shop.app.db.updateTable('job').set({ state: 'ended' }).where('id', '=', job.id).execute();
    expect((await ask(getSetAside, { as: ann, params: { id: job.id } })).status, 'put on it').toBe(200);
    expect((await ask(getSetAside, { as: ben, params: { id: job.id } })).status, 'no part in it').toBe(404);
  });

  it('is given a page at a time, the newest first', async () => {
    for (let n = 0; n < 70; n += 1) await raise(shop.people.ann, `number ${n}`);
    await tablet.sync();
    const pages = await read(shop.people.supervisor);
    expect(pages.map((page) => page.length)).toEqual([50, 20]);
    const words = (pages.flat() as unknown as { words: string }[]).map((one) => one.words);
    expect(words[0]).toContain('number 69');
    expect(words[69]).toContain('number 0');
  });
});

describe('what is read without anybody asking', () => {
  it('is nothing: the server itself has no role, and every reading names who asks', async () => {
    const { db, keys } = shop.app;
    const [tool] = await idsOf('tool');
    const plan = 'a'.repeat(64);
    const readings = [
      () => listTools(db, THE_WORKSHOP, {}, shop.app.clock),
      () => readTools(db, THE_WORKSHOP),
      () => getTool(db, THE_WORKSHOP, tool!),
      () => getWorkshopView(db, THE_WORKSHOP, keys),
      () => listRoutes(db, THE_WORKSHOP),
      () => getPlanText(db, THE_WORKSHOP, plan),
    ];
    for (const read of readings) await expect(read()).rejects.toMatchObject({ code: 'not-allowed' });
  });
});
