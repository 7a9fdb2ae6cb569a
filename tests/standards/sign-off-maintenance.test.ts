import { beforeEach, describe, expect, it, vi } from 'vitest';
import type { Entry, EntryData } from '@/domain/entry';
import { Bay, changed, handOver, ragsIn } from '../support/bay';
import { shippedPlan } from '../support/shipped-plan';
import { trailOf } from '../support/tablet';

/*
 * What has to be looked at, counted and marked before a stage is signed or a vehicle leaves, one test a line, each
 * with its source and how it was read. What is asked is asked of the running program.
 */

vi.setConfig({ testTimeout: 60_000, hookTimeout: 30_000 });

const HOLD = 'build.caps-marked';
const CLOSE = 'build.clear-to-close';

let bay: Bay;

beforeEach(async () => {
  bay = await Bay.open();
});

describe('Regulation (EU) 1321/2014, 145.A.48: performance of maintenance', () => {
  it('SO-145A48a [S, 145.A.48(a), avilaw.info/?p=758]: nothing is closed while a counted thing is missing', async () => {
    const { ann, supervisor } = bay.shop.people;
    await bay.workTo('build.rags-in');
    expect(await bay.pushed(ragsIn(11), ann)).toMatchObject({ verdict: 'recorded' });
    expect(await bay.pushedSignature(CLOSE, supervisor)).toMatchObject({ verdict: 'refused' });
    expect((await bay.stateOnServer()).signatures.map(({ step }) => step)).not.toContain(CLOSE);
    expect(await bay.pushed(handOver, supervisor)).toMatchObject({ verdict: 'refused' });
  });

  it.each(['merrow-s6-rod-bearings', 'corvane-v8-rod-bearings'] as const)(
    'SO-145A48a [S, 145.A.48(a)]: the shipped route counts in what it counts out before it closes (%s)',
    (route) => {
      const { steps } = shippedPlan(route);
      const counts = (side: 'out' | 'in') =>
        steps.flatMap((step) => (step.kind === 'count' && step.side === side ? [step] : []));
      const close = steps.find((step) => step.kind === 'hold' && step.gate === 'close');
      expect(counts('out').length).toBeGreaterThan(1);
      expect(
        counts('in')
          .map(({ tally }) => tally)
          .sort(),
      ).toEqual(
        counts('out')
          .map(({ tally }) => tally)
          .sort(),
      );
      const covered = close?.kind === 'hold' ? close.covers : [];
      for (const { id } of counts('in')) expect(covered).toContain(id);
      // Covers and trays that came off go back on before the vehicle is handed over.
      const removed = steps.flatMap((step) => (step.kind === 'remove' ? [step.item] : []));
      expect(removed.length).toBeGreaterThan(5);
      expect(steps.some(({ kind }) => kind === 'refit')).toBe(true);
    },
  );

  it('SO-145A48b [S, 145.A.48(b), avilaw.info/?p=758]: a critical task does not close without the record of a second check', async () => {
    const { ann, supervisor } = bay.shop.people;
    await bay.workTo(HOLD);
    for (const next of ['build.rags-in', 'build.sump-on', 'build.hand-over']) {
      const verdict = bay.tablet.held(bay.job.id).state.steps[next]?.status;
      expect(verdict, next).not.toBe('done');
    }
    expect(
      await bay.pushed({ kind: 'refitted', step: 'build.sump-on', data: { lot: 'L1' } }, ann),
    ).toMatchObject({
      verdict: 'refused',
    });
    expect(await bay.pushed(handOver, supervisor)).toMatchObject({ verdict: 'refused' });
    expect(
      await bay.pushedSignature(HOLD, supervisor, changed({ presence: 'from photographs' })),
    ).toMatchObject({
      verdict: 'refused',
      code: 'presence',
    });
  });

  it.each(['merrow-s6-rod-bearings', 'corvane-v8-rod-bearings'] as const)(
    'SO-145A48b [S, 145.A.48(b)]: each class A tightening of the shipped route lies under a hold point (%s)',
    (route) => {
      const { steps } = shippedPlan(route);
      const covered = new Set(steps.flatMap((step) => (step.kind === 'hold' ? step.covers : [])));
      const critical = steps.filter((step) => step.kind === 'tighten' && step.class === 'A');
      expect(critical.length).toBeGreaterThan(5);
      expect(critical.map(({ id }) => id).filter((id) => !covered.has(id))).toEqual([]);
    },
  );

  it('SO-145A48c [S, 145.A.48(c) and AMC, online.flipbuilder.com/xuei/lwug page 169]: nobody signs before the last cap is done, nor for fewer heads than there are', async () => {
    const { lead, supervisor } = bay.shop.people;
    await bay.workTo('build.tighten@rod3', lead);
    expect(await bay.pushedSignature(HOLD, supervisor)).toMatchObject({ verdict: 'refused', code: 'order' });
    await bay.workTo(HOLD, lead);
    expect(await bay.pushedSignature(HOLD, supervisor, changed({ count: 6 }))).toMatchObject({
      verdict: 'refused',
      code: 'count-differs',
    });
    // One signature names one hold point; two in one is no entry at all.
    expect(
      await bay.pushedSignature(HOLD, supervisor, changed({ holdPoint: 'clear-to-close' })),
    ).toMatchObject({
      verdict: 'refused',
      code: 'wrong-step',
    });
    expect(await bay.pushedSignature(CLOSE, supervisor)).toMatchObject({ verdict: 'refused' });
    expect(await bay.pushedSignature(HOLD, supervisor)).toMatchObject({ verdict: 'recorded' });
    const trail = await trailOf(bay.shop.app, bay.job.id);
    const signed = trail.find(({ kind }) => kind === 'signed')!;
    const work = trail.filter(({ step }) => step?.startsWith('build.tighten') === true);
    expect(work.length).toBeGreaterThan(20);
    expect(work.filter(({ at }) => at > signed.at)).toEqual([]);
  });

  it('SO-145A48c [S, 145.A.48(c)]: a signature stands after all that it covers, whatever its clock says', async () => {
    const { supervisor } = bay.shop.people;
    await bay.workTo(HOLD);
    const slow = (entry: Entry): Entry => ({
      ...entry,
      at: new Date(Date.parse(entry.at) - 60 * 60_000).toISOString(),
    });
    // A tablet's clock may be wrong; what proves the order is the number up to which the signature covers.
    expect(await bay.pushedSignature(HOLD, supervisor, slow)).toMatchObject({ verdict: 'recorded' });
    const trail = await trailOf(bay.shop.app, bay.job.id);
    const signed = trail.find(({ kind }) => kind === 'signed')!;
    const { covers } = (JSON.parse(signed.body) as { data: EntryData<'signed'> }).data;
    const work = trail.filter(({ step }) => step?.startsWith('build.tighten') === true);
    for (const { seq, device_seq } of work) {
      expect(seq).toBeLessThan(signed.seq);
      expect(device_seq).toBeLessThanOrEqual(covers.upTo[bay.tablet.device]!);
    }
    expect(covers.count).toBeGreaterThanOrEqual(work.length);
  });
});

describe('paint marks', () => {
  it('SO-paint [S, Transport Canada TP185 3/05, tc.gc.ca/eng/civilaviation/publications/tp185-3-05-paint-3861.htm]: a head is marked only once its last angle is recorded, and the marks are compared after', async () => {
    const { ann, lead, supervisor } = bay.shop.people;
    const step = 'build.tighten@rod1';
    await bay.workTo(step, lead);
    const mark = (bolt: string) => {
      const data: EntryData<'marked'> = { bolt, cycle: 1, stage: 2, colour: 'yellow' };
      return { kind: 'marked', step, data } as const;
    };
    const angles = () =>
      bay.tablet
        .held(bay.job.id)
        .state.steps[step]?.entries.filter(
          ({ kind, data }) => kind === 'tightened' && 'cycle' in data && data.cycle === 1 && data.stage === 1,
        ).length ?? 0;
    const refusals: string[] = [];
    while (angles() < 2) {
      if (angles() === 0) refusals.push((await bay.pushed(mark('1A'), ann))!.verdict);
      await bay.tablet.perform(bay.job.id, { technician: ann, supervisor: lead }, bay.shop.kit, {
        entries: 1,
      });
    }
    expect(refusals.length).toBeGreaterThan(4);
    expect(new Set(refusals)).toEqual(new Set(['refused']));
    await bay.workTo('build.side@rod1', lead);
    const marked = (await trailOf(bay.shop.app, bay.job.id)).filter(
      (row) => row.kind === 'marked' && row.step === step,
    );
    expect(marked).toHaveLength(2);

    await bay.workTo(HOLD, lead);
    expect(await bay.pushedSignature(HOLD, supervisor, changed({ count: 7 }))).toMatchObject({
      verdict: 'refused',
      code: 'count-differs',
    });
    expect(await bay.pushedSignature(HOLD, supervisor)).toMatchObject({ verdict: 'recorded' });
  });

  it.each(['merrow-s6-rod-bearings', 'corvane-v8-rod-bearings'] as const)(
    'SO-paint [S, Transport Canada TP185 3/05]: the shipped route looks at the marks again after the road test (%s)',
    (route) => {
      const { steps } = shippedPlan(route);
      const drive = steps.findIndex(({ kind }) => kind === 'drive');
      expect(drive).toBeGreaterThan(0);
      const after = steps.slice(drive).map((step) => JSON.stringify(step));
      expect(after.filter((text) => /\bmarks?\b/i.test(text))).not.toEqual([]);
    },
  );
});
