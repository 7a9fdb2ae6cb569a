import { expect, it, vi } from 'vitest';
import { nextSteps, nextTightening, whyNot } from '@/domain/job';
import type { JobState } from '@/domain/job-state';
import { findStep, type StepOf } from '@/domain/plan';
import { tighteningsLeft } from '@/domain/job-tightening';
import { getFold } from '@/server/job-fold';
import { enrolTestTablet, openShop, openTestJob, setClocks, trailOf } from '../support/tablet';

// A whole workshop and its job are made for this; a busy machine takes its time.
vi.setConfig({ testTimeout: 60_000 });

const CAP = 'build.tighten@rod1';
const HOLD = 'build.caps-marked';

it('two tablets on one bolt: both are recorded, the bolt counts two, and nothing goes on until it is judged', async () => {
  const shop = await openShop();
  const { supervisor, lead, ann, ben } = shop.people;
  const everybody = [supervisor, lead, ann, ben];
  const one = await enrolTestTablet(shop, everybody);
  const two = await enrolTestTablet(shop, everybody);
  const job = await openTestJob(one, supervisor);
  const asAnn = { technician: ann, supervisor: lead };
  const state = async () => (await getFold(shop.app.db, job.id)).state;
  const openOn = (at: JobState) => at.deviations.filter(({ step, disposed }) => step === CAP && !disposed);

  await one.perform(job.id, asAnn, shop.kit, { step: CAP });
  setClocks(one);
  await one.sync();
  two.takeUp(job.id, job.plan);
  await two.sync();
  two.now = one.now;

  // No network: Ann turns 1A and 1B through their first cycle, and so does Ben, who thinks that she has not.
  await one.perform(job.id, asAnn, shop.kit, { entries: 4 });
  await two.perform(job.id, { technician: ben, supervisor: lead }, shop.kit, { entries: 4 });
  setClocks(two);
  expect((await one.sync()).map(({ code }) => code)).toEqual([undefined, undefined, undefined, undefined]);
  const [first, ...others] = await two.sync();
  expect(first).toMatchObject({ verdict: 'recorded', code: 'order' });
  expect(others.map(({ verdict }) => verdict)).toEqual(['recorded', 'recorded', 'recorded']);

  const torn = await state();
  const byBoth = (await trailOf(shop.app, job.id)).filter(
    ({ kind, step }) => kind === 'tightened' && step === CAP,
  );
  expect(byBoth.map(({ by_person }) => by_person)).toEqual([
    ...Array(4).fill(ann.id),
    ...Array(4).fill(ben.id),
  ]);
  expect(torn.bolts['1A']?.used).toMatchObject({ new: 2 });
  expect(torn.bolts['1B']?.used).toMatchObject({ new: 2 });
  // It is one matter, and goes for all that Ben turned.
  const [matter, ...noOther] = openOn(torn);
  expect(noOther).toEqual([]);
  expect(matter!.words).toMatch(/3 more records of that tablet on this step came with it\.$/);

  // On both tablets nothing more is turned here, and nothing that comes after it is done.
  await one.sync();
  for (const { confirmed } of [one.held(job.id), two.held(job.id)]) {
    expect(whyNot(confirmed, CAP)).toMatchObject({
      ok: false,
      code: 'deviation-open',
      why: expect.stringContaining('Test ann on Tablet'),
    });
    expect(nextSteps(confirmed).map(({ id }) => id)).not.toContain(CAP);
    expect(whyNot(confirmed, HOLD)).toMatchObject({ ok: false });
  }
  expect(one.held(job.id).confirmed).toEqual(two.held(job.id).confirmed);

  // The lead has asked both: it was turned twice, so the cap is let off and its bolts are replaced.
  const data = {
    deviation: matter!.id,
    disposition: 'replace',
    reason: 'both turned it; new bolts',
  } as const;
  await one.record(job.id, { kind: 'deviation-disposed', data }, { by: lead });
  const bolts = ['1A', '1B'];
  const reason = 'turned on two tablets';
  await one.record(job.id, { kind: 'started-again', step: CAP, data: { bolts, reason } }, { by: ann });
  expect((await one.sync()).every(({ verdict, code }) => verdict === 'recorded' && code === undefined)).toBe(
    true,
  );
  await two.sync();
  const again = two.held(job.id).confirmed;
  const step = findStep(again.plan, CAP) as StepOf<'tighten'>;
  expect(nextTightening(again, step)).toMatchObject({ bolt: '1A', cycle: 0, stage: 0 });
  // Let off is not undone: what both turned stays on the bolts for good.
  expect(again.bolts['1A']?.used).toMatchObject({ new: 2 });
  const left = bolts.map((bolt) => tighteningsLeft(again, step, bolt));
  expect(left).toEqual([0, 0]);

  // These bolts have no tightening left, so the cap starts with new ones.
  for (const bolt of bolts) {
    const data = { bolt, lot: 'B-77', reason: 'no tightening left' };
    await one.record(job.id, { kind: 'bolt-replaced', step: CAP, data }, { by: ann });
  }

  // From here it goes on as ever, on one tablet, to the hold point.
  await one.perform(job.id, asAnn, shop.kit, { step: HOLD });
  setClocks(one);
  expect((await one.sync()).filter(({ code }) => code !== undefined)).toEqual([]);
  await one.sign(job.id, HOLD, { by: supervisor });
  setClocks(one);
  expect((await one.sync()).at(-1)).toMatchObject({ verdict: 'recorded' });
  expect((await state()).signatures).toMatchObject([{ step: HOLD, by: supervisor.id }]);
});
