import { readFileSync } from 'node:fs';
import { createElement } from 'react';
import { renderToStaticMarkup } from 'react-dom/server';
import { beforeEach, describe, expect, it, vi } from 'vitest';
import type { Entry } from '@/domain/entry';
import type { JobState } from '@/domain/job-state';
import { verifyTrail } from '@/domain/trail';
import type { TrailExport } from '@/domain/trail-export';
import { JobSignatures } from '@/features/jobs/JobSignatures';
import { readTrail } from '@/features/trail/read-trail';
import { TrailView } from '@/features/trail/TrailView';
import { linesOf } from '@/features/trail/trail-lines';
import { POST as postSwitch } from '@/pages/api/auth/switch';
import { GET as getExport } from '@/pages/api/jobs/[id]/export';
import { GET as getJob } from '@/pages/api/jobs/[id]/index';
import { GET as getTrail } from '@/pages/api/jobs/[id]/trail';
import { POST as postKeys } from '@/pages/api/keys/index';
import { GET as getMe } from '@/pages/api/me/index';
import { GET as getPins, POST as postPin } from '@/pages/api/pins/index';
import { nodeChecks } from '@/server/trail-checks';
import { allOperations, nameOf } from '../support/api-table';
import { newBrowser, signIn, TEST_PASSWORD } from '../support/requests';
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

/*
 * Electronic records and signatures, as 21 CFR part 11 asks for them, one test a line; each was read in a public
 * copy of the regulation, named beside it. What is asked is asked of the running program.
 */

vi.setConfig({ testTimeout: 60_000, hookTimeout: 30_000 });

const HOLD = 'build.caps-marked';
const ZONE = 'Europe/Lisbon';

let shop: Shop;
let tablet: TestTablet;
let job: OpenedJob;

beforeEach(async () => {
  shop = await openShop();
  const { supervisor, lead, ann, ben, owner } = shop.people;
  tablet = await enrolTestTablet(shop, [supervisor, lead, ann, ben, owner]);
  job = await openTestJob(tablet, supervisor);
});

/** Ann's work up to the hold point; the lead disposes of what needs it. */
async function workTo(step: string): Promise<void> {
  const { ann, lead } = shop.people;
  await tablet.perform(job.id, { technician: ann, supervisor: lead }, shop.kit, { step });
  setClocks(tablet);
}

async function signedHold(): Promise<Entry> {
  await workTo(HOLD);
  const signature = await tablet.sign(job.id, HOLD, { by: shop.people.supervisor });
  expect((await tablet.sync()).at(-1)).toMatchObject({ verdict: 'recorded' });
  return signature;
}

const read = async (handler: typeof getExport, as = shop.people.auditor) =>
  (await ask(handler, { as, params: { id: job.id } })).text;

/** The page of the trail as a browser gets it to show and to print. */
async function trailPage(): Promise<{ html: string; trail: ReturnType<typeof readTrail> }> {
  const trail = readTrail(new TextEncoder().encode(await read(getTrail)));
  const html = renderToStaticMarkup(createElement(TrailView, { job: job.id, trail, zone: ZONE }));
  return { html, trail };
}

const escaped = (words: string) => renderToStaticMarkup(createElement('i', null, words)).slice(3, -4);

describe('21 CFR 11.10, controls for closed systems (fr.scribd.com/document/319285110)', () => {
  it('SO-11.10b [S]: what is printed and what is exported say the same, entry by entry', async () => {
    await signedHold();
    const { html } = await trailPage();
    const exported = readTrail(new TextEncoder().encode(await read(getExport)));
    expect(await verifyTrail(await read(getExport), nodeChecks())).toMatchObject({ ok: true });
    const lines = linesOf(exported, ZONE);
    const rows = html.split('<tr').filter((row) => row.includes('trail-pick'));
    expect(rows).toHaveLength(exported.entries.length);
    for (const [index, { seq, who, what, hash, tabletClock }] of lines.entries()) {
      const row = rows[index]!;
      expect(row).toContain(`aria-label="Entry ${seq}"`);
      for (const words of [who, what, tabletClock, hash.slice(0, 4)]) expect(row).toContain(escaped(words));
    }
    // On paper neither the ledger nor the numbers of its lines stay away.
    const print = readFileSync('src/styles/trail.css', 'utf8').split('@media print')[1]!;
    expect(print).toMatch(/\.trail-ledger,[^}]*max-height: none;\s*overflow: visible/);
    expect(print).toMatch(/button\.trail-pick \{\s*display: inline !important/);
  });

  it('SO-11.10e [S]: a changed reading keeps its old value, the new one, who and when, on screen and in the export', async () => {
    await workTo('build.turn-to@stop2');
    const { ann, supervisor } = shop.people;
    const first = tablet.held(job.id).outbox.find(({ entry }) => entry.kind === 'read')!.entry as Entry & {
      kind: 'read';
    };
    const data = { ...first.data, value: '0.31' };
    expect(data.value).not.toBe(first.data.value);
    const reason = 'the blade was read upside down';
    await tablet.record(
      job.id,
      { kind: 'corrected', step: first.step!, data: { of: first.id, class: 'substantive', reason, data } },
      { by: supervisor },
    );
    setClocks(tablet);
    expect((await tablet.sync()).filter(({ verdict }) => verdict !== 'recorded')).toEqual([]);

    const { html, trail } = await trailPage();
    const lines = linesOf(trail, ZONE);
    const before = lines.find(({ id }) => id === first.id)!;
    const after = lines.at(-1)!;
    expect(before).toMatchObject({ who: ann.name, superseded: `corrected by entry ${after.seq}` });
    expect(before.what).toContain(`read ${first.data.value}`);
    expect(after).toMatchObject({ who: supervisor.name });
    expect(after.what).toContain(reason);
    expect(after.what).toContain('read 0.31');
    for (const words of [before.what, before.tabletClock, after.what, after.tabletClock, after.who])
      expect(html).toContain(escaped(words));

    const { body } = JSON.parse(await read(getExport)) as TrailExport;
    const values = body.entries.map(({ recorded }) => JSON.stringify(recorded));
    expect(
      values.filter((text) => text.includes(first.id) && text.includes(`"value":"${first.data.value}"`)),
    ).toHaveLength(1);
    expect(values.filter((text) => text.includes('"value":"0.31"'))).toHaveLength(1);
  });

  it('SO-11.10e [S]: no operation of the API deletes anything, and none but the push writes to a trail', () => {
    const operations = allOperations();
    expect(operations.length).toBeGreaterThan(25);
    expect(operations.filter(({ method }) => method === 'DELETE').map(nameOf)).toEqual([]);
    const onJobs = operations
      .filter(({ method, path }) => method !== 'GET' && path.startsWith('/api/jobs'))
      .map(nameOf)
      .sort();
    expect(onJobs).toEqual([
      'POST /api/jobs',
      'POST /api/jobs/prepare',
      // Who the customer was, never an entry; the trail says that it was erased.
      'POST /api/jobs/{id}/erase',
      'POST /api/jobs/{id}/people',
    ]);
  });

  it('SO-11.10f [S]: a step out of its order is refused, and the refusal is on record', async () => {
    await workTo('strip.raise');
    await tablet.sync();
    const tooSoon = { kind: 'done', step: 'strip.cap-off@rod1', data: {} } as const;
    await expect(tablet.record(job.id, tooSoon, { by: shop.people.ann })).rejects.toThrow(/\(order\)/);
    const entry = await tablet.record(job.id, tooSoon, { by: shop.people.ann, force: true });
    expect((await tablet.sync()).at(-1)).toMatchObject({ verdict: 'refused', code: 'order' });
    const kept = await shop.app.db.selectFrom('refused_entry').selectAll().execute();
    expect(kept).toMatchObject([{ entry_id: entry.id, code: 'order', by_person: shop.people.ann.id }]);
    const last = (await trailOf(shop.app, job.id)).at(-1)!;
    expect(last.kind).toBe('refused');
    expect((await trailOf(shop.app, job.id)).map(({ id }) => id)).not.toContain(entry.id);
  });

  it('SO-11.10g [S]: without the role nobody signs, whatever their tablet says', async () => {
    await workTo(HOLD);
    const { ben } = shop.people;
    await expect(tablet.sign(job.id, HOLD, { by: ben })).rejects.toThrow(/\(role\)/);
    await tablet.sign(job.id, HOLD, { by: ben, force: true });
    expect((await tablet.sync()).at(-1)).toMatchObject({ verdict: 'refused', code: 'role' });
    await tablet.sign(job.id, HOLD, {
      by: ben,
      force: true,
      change: (entry) => ({ ...entry, author: { ...entry.author, roles: ['supervisor'] } }),
    });
    expect((await tablet.sync()).at(-1)).toMatchObject({ verdict: 'refused' });
    expect((await trailOf(shop.app, job.id)).map(({ kind }) => kind)).not.toContain('signed');
  });
});

describe('21 CFR 11.50, what a signature shows (law.lawstack.com/cfr/21/11.50)', () => {
  it('SO-11.50 [S]: printed name, date and time, and meaning, on the job page and on the trail, on screen and in print', async () => {
    const signature = (await signedHold()) as Entry & { kind: 'signed' };
    const { supervisor, auditor } = shop.people;
    const shown = await ask(getJob, { as: auditor, params: { id: job.id } });
    const { jobState } = shown.body as { jobState: JobState };
    const stamp = renderToStaticMarkup(createElement(JobSignatures, { state: jobState, zone: ZONE }));
    const { html, trail } = await trailPage();
    const line = linesOf(trail, ZONE).find(({ id }) => id === signature.id)!;
    const meaning = signature.data.meaning;
    expect(meaning).toMatch(/counted 8 marks/);
    const [, year, day, clock] = /^(\d{4})-\d\d-(\d\d)T(\d\d:\d\d)/.exec(inZone(signature.at))!;
    for (const words of [supervisor.name, meaning, `${Number(day)}`, year!, clock!]) {
      expect(stamp, 'on the page of the job').toContain(escaped(words));
    }
    expect(line).toMatchObject({ who: supervisor.name, isSignature: true });
    expect(line.what).toContain(meaning);
    expect(line.tabletClock).toContain(clock);
    expect(html.slice(0, html.indexOf(escaped(line.what)))).toMatch(
      new RegExp(`${Number(day)} \\w+ ${year}`),
    );
    for (const words of [line.who, line.what, line.tabletClock])
      expect(html, 'on the trail').toContain(escaped(words));
    expectPrinted(stamp);
    expectPrinted(html);
  });
});

/** The wall clock of the workshop, in the form of RFC 3339. */
const inZone = (at: string) =>
  new Intl.DateTimeFormat('sv-SE', { timeZone: ZONE, dateStyle: 'short', timeStyle: 'short' })
    .format(new Date(at))
    .replace(' ', 'T');

/** No rule for paper takes away what a signature stands in. */
function expectPrinted(html: string): void {
  const css = ['print.css', 'trail.css', 'records.css', 'jobs.css']
    .map((file) => readFileSync(`src/styles/${file}`, 'utf8').replaceAll(/\/\*[\s\S]*?\*\//g, ''))
    .join('\n');
  const paper = css.split('@media print').slice(1).join('\n');
  const hidden = [...paper.matchAll(/([^{}]+)\{[^{}]*display:\s*none/g)].flatMap(([, names = '']) =>
    names.split(',').map((name) => name.trim()),
  );
  expect(hidden).toContain('.no-print');
  const classes = new Set(
    [...html.matchAll(/class="([^"]*)"/g)].flatMap(([, names = '']) => names.split(' ')),
  );
  const standsIn = [
    'signature',
    'signature-stamp',
    'signature-name',
    'signature-words',
    'job-stamps',
    'part',
  ];
  const trail = ['trail-page', 'trail-both', 'trail-ledger', 'data-table', 'trail-line', 'trail-who'];
  const own = [...standsIn, ...trail].filter((name) => classes.has(name));
  expect(own.length).toBeGreaterThan(4);
  expect(own.filter((name) => hidden.some((selector) => selector.endsWith(`.${name}`)))).toEqual([]);
}

describe('21 CFR 11.70, signatures stay with their records (gpo.gov CFR-1999-title21-vol1-sec11-70.xml)', () => {
  it('SO-11.70 [S]: a signature that is put on another entry is refused by the server', async () => {
    const { ann } = shop.people;
    const remark = (words: string) =>
      ({ kind: 'deviation-raised', data: { class: 'C', words, blocks: false } }) as const;
    await tablet.record(job.id, remark('one'), { by: ann });
    await tablet.record(job.id, remark('two'), { by: ann });
    const [one, two] = tablet.held(job.id).outbox.splice(0);
    const answer = await pushTo(tablet.credential, {
      device: tablet.device,
      sentAt: new Date(tablet.now).toISOString(),
      jobs: [],
      entries: [one!, { ...two!, signature: one!.signature }],
    });
    expect(answer.verdicts).toMatchObject([
      { verdict: 'recorded' },
      { verdict: 'refused', code: 'signature-wrong' },
    ]);
  });
});

describe('21 CFR 11.200(a), how a signature is given (law.lawstack.com/cfr/21/11.200)', () => {
  it('SO-11.200a1 [S]: a new session takes name and password; within it each signature takes the PIN', async () => {
    const { supervisor } = shop.people;
    const browser = await signIn(supervisor);
    expect((await browser.ask(getMe)).status).toBe(200);
    await shop.app.db
      .updateTable('session')
      .set({ expiresAt: '2020-01-01T00:00:00.000Z' } as never)
      .where('userId', '=', supervisor.id)
      .execute();
    // A session that is over opens nothing, neither by itself nor by switching to it; a key for signing needs one.
    expect((await browser.ask(getMe)).status).toBe(401);
    expect((await browser.ask(postSwitch, { body: { person: supervisor.id } })).status).not.toBe(200);
    browser.tablet = tablet.credential;
    const { publicKey } = tablet.makeKey('another');
    expect((await browser.ask(postKeys, { body: { publicKey } })).status).toBe(401);
    await signIn(supervisor, browser);
    expect((await browser.ask(getMe)).status).toBe(200);

    await workTo(HOLD);
    const { pin, ...withoutPin } = supervisor;
    await tablet.sign(job.id, HOLD, { by: withoutPin });
    expect((await tablet.sync()).at(-1)).toMatchObject({ verdict: 'refused', code: 'pin-missing' });
    await tablet.sign(job.id, HOLD, { by: supervisor, pin });
    expect((await tablet.sync()).at(-1)).toMatchObject({ verdict: 'recorded' });
  });

  it('SO-11.200a3 [S]: the owner can sign as nobody else and can set nobody’s PIN', async () => {
    await workTo(HOLD);
    const { owner, supervisor } = shop.people;
    // With the owner's own key and PIN under the supervisor's name, and with the owner's PIN under the supervisor's key.
    const asSupervisor = (entry: Entry) =>
      ({ ...entry, by: supervisor.id, author: { name: supervisor.name, roles: supervisor.roles } }) as Entry;
    const ownersPin = '730184';
    const browser = await signIn(owner);
    expect((await browser.ask(postPin, { body: { pin: ownersPin, password: TEST_PASSWORD } })).status).toBe(
      200,
    );
    await tablet.sign(job.id, HOLD, { by: owner, pin: ownersPin, force: true, change: asSupervisor });
    expect((await tablet.sync()).at(-1)).toMatchObject({ verdict: 'refused', code: 'key-foreign' });
    await tablet.sign(job.id, HOLD, { by: supervisor, pin: ownersPin });
    expect((await tablet.sync()).at(-1)).toMatchObject({ verdict: 'refused', code: 'pin-wrong' });

    // A PIN is set with its person's own session and password; naming another person is not even read.
    const other = await browser.ask(postPin, {
      body: { pin: '395172', password: TEST_PASSWORD, person: supervisor.id },
    });
    expect(other.status).toBe(400);
    expect(
      (await newBrowser().ask(postPin, { body: { pin: '395172', password: TEST_PASSWORD } })).status,
    ).toBe(401);
    const own = await signIn(supervisor);
    expect((await own.ask(postPin, { body: { pin: '395172', password: 'not the password' } })).status).toBe(
      400,
    );
    expect((await own.ask(postPin, { body: { pin: '395172', password: TEST_PASSWORD } })).status).toBe(200);
    expect((await own.ask(getPins)).body).toMatchObject({ hasPin: true });
    const told = await shop.app.db
      .selectFrom('workshop_entry')
      .select(['by_person', 'body'])
      .where('kind', '=', 'pin-set')
      .orderBy('seq', 'desc')
      .execute();
    expect(told[0]).toMatchObject({ by_person: supervisor.id });
    expect(told[0]!.body).not.toContain('395172');
  });
});
