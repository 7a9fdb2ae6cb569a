import { beforeEach, describe, expect, it, vi } from 'vitest';
import { POST as postPrepare } from '@/pages/api/jobs/prepare';
import { PATCH as patchDevice } from '@/pages/api/devices/[id]';
import { guideTo } from '@/domain/deviation-guide';
import type { Entry } from '@/domain/entry';
import { getFold } from '@/server/job-fold';
import { getJob } from '@/server/jobs';
import type { ScriptedEntry } from '@db/scripted-work';
import {
  ask,
  enrolTestTablet,
  type OpenedJob,
  openShop,
  openTestJob,
  type Shop,
  type TestTablet,
} from '../support/tablet';

// A whole workshop and its jobs are made for each of these; a busy machine takes its time.
vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

const CAP = 'build.tighten@rod1';

let shop: Shop;
let one: TestTablet;
let two: TestTablet;
let job: OpenedJob;

beforeEach(async () => {
  shop = await openShop();
  const { supervisor, lead, ann, ben } = shop.people;
  one = await enrolTestTablet(shop, [supervisor, lead, ann, ben]);
  two = await enrolTestTablet(shop, [supervisor, lead, ann, ben]);
  await name(one, 'Bay 1');
  await name(two, 'Bay 2');
  job = await openTestJob(one, supervisor);
  two.takeUp(job.id, job.plan);
  await two.sync();
});

function name(tablet: TestTablet, words: string) {
  const as = shop.people.owner;
  return ask(patchDevice, { method: 'PATCH', as, params: { id: tablet.device }, body: { name: words } });
}

const onStep = (kind: ScriptedEntry['kind'], step: string, data: object) =>
  ({ kind, step, data }) as Omit<ScriptedEntry, 'part' | 'afterMs'>;

/** Both tablets stand before the same step, and neither hears of the other from there on. */
async function bothAt(step: string): Promise<void> {
  const { ann, lead } = shop.people;
  await one.perform(job.id, { technician: ann, supervisor: lead }, shop.kit, { step });
  await one.sync();
  await two.sync();
  two.now = one.now;
}

/** The newest deviation, with what people read of it. */
async function newest() {
  const { state } = await getFold(shop.app.db, job.id);
  const deviation = state.deviations.at(-1)!;
  const { tablets } = await getJob(shop.app, shop.people.supervisor, job.id);
  const guide = guideTo(state, deviation, new Map(tablets.map(({ id, name: called }) => [id, called])));
  return { deviation, guide: guide! };
}

const values = (choices: readonly { value: string }[]) => choices.map(({ value }) => value);

describe('what a conflict is in words', () => {
  it('two tablets that tightened one bolt: who, where, that both count, and what the bolts need', async () => {
    const { ann, ben, lead } = shop.people;
    await bothAt(CAP);
    await one.perform(job.id, { technician: ann, supervisor: lead }, shop.kit, { entries: 1 });
    await two.perform(job.id, { technician: ben, supervisor: lead }, shop.kit, { entries: 1 });
    await one.sync();
    expect(await two.sync()).toMatchObject([{ verdict: 'recorded', code: 'order' }]);
    const { deviation, guide } = await newest();
    expect(deviation).toMatchObject({ rule: 'conflict', class: 'A', step: CAP, rod: 1, blocks: true });
    expect(guide.happened).toBe(
      'Two tablets recorded “Bolt 1A tightened, confirmed at 10 N·m, cycle 1 of 2”: Test ann on Bay 1, and Test ben on Bay 2, who had not heard of it. Both were done, and the bolt counts both.',
    );
    expect(guide.blocked).toMatch(/^Nothing more is tightened at “.+”, and what comes after it waits\.$/);
    expect(guide.next).toContain('Ask both what they really turned');
    expect(guide.choices[0]).toMatchObject({
      value: 'rework',
      note: expect.stringContaining('let 1A and 1B off'),
    });
    expect(values(guide.choices)).toEqual(['rework', 'replace', 'accept as is', 'scrap']);
  });

  it('a removal recorded twice: where to look, and nothing about bolts', async () => {
    const { ann, ben } = shop.people;
    await bothAt('strip.sump-off');
    await one.record(job.id, onStep('removed', 'strip.sump-off', { count: 20, into: 'tray 1' }), { by: ann });
    await two.record(job.id, onStep('removed', 'strip.sump-off', { count: 19, into: 'box 2' }), { by: ben });
    await one.sync();
    expect(await two.sync()).toMatchObject([{ verdict: 'recorded', code: 'already-done' }]);
    const { guide } = await newest();
    expect(guide.happened).toMatch(
      /^Two tablets: Test ann on Bay 1 recorded “.*20 counted, in tray 1”, and Test ben on Bay 2, who had not heard of it, “.*19 counted, in box 2”\. Both are kept\.$/,
    );
    expect(guide.blocked).toMatch(/^What comes after “.+” waits\.$/);
    expect(guide.next).toContain('is all of it there?');
    expect(values(guide.choices)).toEqual(['accept as is', 'rework']);
  });

  it('work by a plan that had been moved: who moved it, and that it happened', async () => {
    const { ann, supervisor, lead } = shop.people;
    const prepared = await ask(postPrepare, {
      as: supervisor,
      body: { route: 'test-route', options: { plate: 'none' } },
    });
    const { plan: to, planBody } = prepared.body as { plan: string; planBody: { steps: { id: string }[] } };
    const gone = job.plan.steps.find(({ id }) => !planBody.steps.some((step) => step.id === id))!;
    await bothAt(gone.id);
    const data = { to, reason: 'there is no plate on this one', kept: [], voided: [gone.id] };
    await one.record(job.id, { kind: 'plan-moved', data }, { by: lead });
    await two.perform(job.id, { technician: ann, supervisor: lead }, shop.kit, { entries: 1 });
    await one.sync();
    const [verdict] = await two.sync();
    expect(verdict).toMatchObject({ verdict: 'recorded', code: 'unknown-step' });
    const { guide } = await newest();
    expect(guide.happened).toMatch(
      /^Test ann on Bay 2 recorded “.+” by the plan that their tablet had, without having heard that Test lead had moved the job to a newer one, which does not have this step\. It happened, and it is kept\.$/,
    );
    expect(guide.blocked).toBe('The handover waits. The newer plan goes on.');
    expect(values(guide.choices)).toEqual(['accept as is', 'rework']);
  });

  it('a copied tablet: which number, both records, and that it is enrolled anew', async () => {
    const { ann, ben } = shop.people;
    const remark = { class: 'C', words: 'from the first', blocks: false } as const;
    const first = await two.record(job.id, { kind: 'deviation-raised', data: remark }, { by: ann });
    await two.sync();
    const twin = {
      ...first,
      ...{ id: shop.app.ids.next(), by: ben.id, author: { name: ben.name, roles: [...ben.roles] } },
      data: { ...remark, words: 'from the copy' },
    } as Entry;
    two.held(job.id).outbox.push(await two.signed(twin, { by: ben }));
    expect(await two.sync()).toMatchObject([{ verdict: 'recorded', code: 'number-used-twice' }]);
    const { guide } = await newest();
    expect(guide.happened).toBe(
      'Bay 2 used its number 1 twice: for “Deviation, class C: from the first” by Test ann and for “Deviation, class C: from the copy” by Test ben. The tablet was copied, or its browser was put back to an earlier state. Both records are kept. Enrol the tablet anew before anybody goes on with it.',
    );
    expect(guide.next).toContain('enrol it anew');
    expect(values(guide.choices)).toEqual(['accept as is', 'rework']);
  });

  it('a lost tablet: which one, who worked with it, from which number on, and what has come since', async () => {
    const { ann, ben, supervisor } = shop.people;
    const remark = (words: string) =>
      ({ kind: 'deviation-raised', data: { class: 'C', words, blocks: false } }) as const;
    await two.record(job.id, remark('one'), { by: ann });
    await two.record(job.id, remark('two'), { by: ben });
    await two.sync();
    await two.record(job.id, remark('never sent'), { by: ben });
    const change = (body: object) =>
      ask(patchDevice, { method: 'PATCH', as: supervisor, params: { id: two.device }, body });
    await change({ state: 'lost', reason: 'stolen from the yard' });
    const { deviation, guide } = await newest();
    expect(guide.happened).toBe(
      'Bay 2 was declared lost. Its records from number 3 on never came. On it worked: Test ann, Test ben.',
    );
    expect(guide.next).toContain('If the tablet is found, or its file, what it held is still taken.');
    expect(values(guide.choices)).toEqual(['accept as is', 'rework']);
    await change({ state: 'active' });
    await two.sync();
    const { state } = await getFold(shop.app.db, job.id);
    const later = guideTo(state, deviation, new Map([[two.device, 'Bay 2']]));
    expect(later?.happened).toContain(
      'Its records from number 3 on had not come; one of them has come since.',
    );
  });
});
