/* Ways that a job may go wrong and be put right, each walked from end to end against the server. */
import { beforeEach, describe, expect, it, vi } from 'vitest';
import type { Entry, EntryData, EntryOf, Recorded } from '@/domain/entry';
import { nextTightening, replay } from '@/domain/job';
import { DONE_PAST, donePast } from '@/domain/job-evidence';
import { nextSteps, whyNot } from '@/domain/job-order';
import type { JobState } from '@/domain/job-state';
import { findStep } from '@/domain/plan';
import { signatureView } from '@/domain/signature-view';
import { nextScripted } from '@db/scripted-work';
import {
  enrolTestTablet,
  openShop,
  openTestJob,
  setClocks,
  trailOf,
  type OpenedJob,
  type Shop,
  type TestTablet,
} from '../support/tablet';

// A whole workshop and its jobs are made for each of these; a busy machine takes its time.
vi.setConfig({ testTimeout: 60_000, hookTimeout: 30_000 });

const HOLD = 'build.caps-marked';
const CLOSE = 'build.clear-to-close';
const GAUGE = 'strip.gauge@rod2';
const TIGHTEN = 'build.tighten@rod2';

let shop: Shop;
let tablet: TestTablet;
let job: OpenedJob;

beforeEach(async () => {
  shop = await openShop();
  const { supervisor, lead, ann, ben } = shop.people;
  tablet = await enrolTestTablet(shop, [supervisor, lead, ann, ben]);
  job = await openTestJob(tablet, supervisor);
});

const state = (): JobState => tablet.held(job.id).state;

/** Ann works, the lead disposes, and the supervisor signs what she has to; until this step is next. */
async function workUntil(step: string): Promise<void> {
  const { ann, lead, supervisor } = shop.people;
  for (;;) {
    await tablet.perform(job.id, { technician: ann, supervisor: lead }, shop.kit, { step, signs: false });
    const [next] = nextSteps(state()).filter(({ kind }) => kind !== 'witness');
    if (next === undefined || next.id === step) break;
    await tablet.sign(job.id, next.id, { by: supervisor });
    await sendAll();
  }
}

/** All of it goes to the server, which takes it without a conflict. */
async function sendAll(): Promise<void> {
  setClocks(tablet);
  const verdicts = await tablet.sync();
  expect(verdicts.filter(({ verdict, code }) => verdict !== 'recorded' || code !== undefined)).toEqual([]);
}

/** The job by the server's own rows. */
async function stateAtServer(): Promise<JobState> {
  const rows = await trailOf(shop.app, job.id);
  const recorded = rows.map(({ body }) => JSON.parse(body) as Recorded);
  const { plan, planHash } = tablet.held(job.id);
  return replay(new Map([[planHash, plan]]), recorded);
}

function lastOn<K extends Entry['kind']>(kind: K, step: string): { id: string; data: EntryOf<K>['data'] } {
  const found = state().steps[step]?.entries.findLast((kept) => kept.kind === kind);
  if (!found) throw new Error(`no "${kind}" on ${step}`);
  return { id: found.id, data: found.data as EntryOf<K>['data'] };
}

describe('a clearance corrected after its hold point was signed', () => {
  /** The card said 0.085, and 0.048 was written down; the sump is on before anybody sees it. */
  async function correctTo(clearance: string): Promise<void> {
    const reading = lastOn('gauged', GAUGE);
    const data = { ...reading.data, clearance };
    await tablet.record(
      job.id,
      {
        kind: 'corrected',
        step: GAUGE,
        data: { of: reading.id, class: 'substantive', reason: 'misread', data },
      },
      { by: shop.people.ann },
    );
  }

  it('opens the hold point and a deviation, and what was done past it is shown as such', async () => {
    const { supervisor, lead } = shop.people;
    await workUntil('build.oil');
    expect(state().steps['build.sump-on']?.status).toBe('done');
    await correctTo('0.085');
    await sendAll();

    const after = await stateAtServer();
    expect(after).toEqual(state());
    const signature = after.signatures.find(({ step }) => step === CLOSE)!;
    expect(signature.reopened).toContain('corrected something on what was signed');
    expect(signature.donePast).toEqual(expect.arrayContaining(['build.sump-on']));
    expect(signatureView(signature, 'Europe/Lisbon')).toMatchObject({
      state: 'open again',
      covers: expect.stringContaining(DONE_PAST),
    });
    // What was done stays done; nothing new is begun behind the hold point.
    expect(after.steps['build.sump-on']?.status).toBe('done');
    expect(whyNot(after, 'build.oil')).toMatchObject({
      code: 'unsigned',
      why: expect.stringContaining('was opened again'),
    });
    const deviation = after.deviations.find(({ rule }) => rule === 'clearance-outside')!;
    expect(deviation).toMatchObject({ class: 'A', blocks: true, words: expect.stringContaining('0.085') });
    expect(whyNot(after, CLOSE)).toMatchObject({ code: 'deviation-open' });

    // The ends now differ too, which is a deviation of its own; the customer agrees to both as they are.
    for (const one of after.deviations.filter(({ blocks, disposed }) => blocks && !disposed)) {
      await tablet.record(
        job.id,
        {
          kind: 'deviation-disposed',
          data: {
            deviation: one.id,
            disposition: 'accept as is',
            reason: 'wide, and watched',
            customerAgreed: { when: 'the same day', how: 'by telephone' },
          },
        },
        { by: lead },
      );
    }
    await tablet.sign(job.id, CLOSE, { by: supervisor });
    await sendAll();
    const again = await stateAtServer();
    expect(again.signatures.filter(({ step, reopened }) => step === CLOSE && !reopened)).toHaveLength(1);
    expect(whyNot(again, 'build.oil')).toEqual({ ok: true });
    // Signed again it stays on record that the sump went on over the other figure.
    expect(donePast(again, 'build.sump-on')?.entry).toBe(signature.entry);
  });

  it('opens the hold point alone where the figure stays inside its limits', async () => {
    await workUntil('build.oil');
    const before = state().deviations.length;
    await correctTo('0.052');
    await sendAll();
    const after = await stateAtServer();
    expect(after.deviations).toHaveLength(before);
    expect(after.signatures.find(({ step }) => step === CLOSE)?.reopened).toBeDefined();
    await tablet.sign(job.id, CLOSE, { by: shop.people.supervisor });
    await sendAll();
    expect(whyNot(await stateAtServer(), 'build.oil')).toEqual({ ok: true });
  });

  it('is not passed off as a slip of the pen: the server refuses that and keeps it', async () => {
    await workUntil('build.oil');
    await sendAll();
    const reading = lastOn('gauged', GAUGE);
    const data = { ...reading.data, clearance: '0.085' };
    await tablet.record(
      job.id,
      { kind: 'corrected', step: GAUGE, data: { of: reading.id, class: 'clerical', reason: 'slip', data } },
      { by: shop.people.ann, force: true },
    );
    setClocks(tablet);
    expect((await tablet.sync()).at(-1)).toMatchObject({ verdict: 'refused', code: 'not-clerical' });
    const after = await stateAtServer();
    expect(after.signatures.every(({ reopened }) => reopened === undefined)).toBe(true);
  });
});

describe('over-turned in cycle 2 after its partner was done', () => {
  /** One act of the cap as the programme asks for it; `over` for the angle that went too far. */
  async function turnOnce(over: Partial<EntryData<'tightened'>> = {}): Promise<Entry> {
    const step = findStep(state().plan, TIGHTEN)!;
    const next = nextScripted(state(), step, { ...shop.kit, workshop: tablet.workshop });
    if (next?.kind === 'tightened') Object.assign(next.data, over);
    if (!next) throw new Error('the cap is finished');
    return tablet.record(job.id, next, { by: shop.people.ann });
  }

  function next() {
    const step = findStep(state().plan, TIGHTEN);
    return step?.kind === 'tighten' ? nextTightening(state(), step) : undefined;
  }

  /** To the last angle of 2B in cycle 2: 2A has its own behind it, and its mark. */
  async function toLastAngle(): Promise<void> {
    await workUntil(TIGHTEN);
    for (;;) {
      const act = next();
      const isThere =
        act?.kind === 'stage' && act.bolt === '2B' && act.cycle === 1 && act.spec.kind === 'angle';
      if (isThere) return;
      await turnOnce();
    }
  }

  it('condemns the bolt, lets the partner off, voids the marks, and starts the cap at cycle 1', async () => {
    await toLastAngle();
    expect(state().bolts['2A']).toMatchObject({ used: { new: 2 }, marked: { colour: expect.any(String) } });
    expect(state().bolts['2B']).toMatchObject({ used: { new: 1 } });

    await turnOnce({ how: 'typed', value: '140', outcome: 'over' });
    expect(state().bolts['2B']).toMatchObject({ condemned: expect.any(String), used: { new: 2 } });
    expect([state().bolts['2A']?.marked, state().bolts['2B']?.marked]).toEqual([undefined, undefined]);
    expect(next()).toMatchObject({ kind: 'release', bolt: '2A', because: 'over' });

    expect(await turnOnce()).toMatchObject({ kind: 'released', data: { bolt: '2A' } });
    expect(next()).toMatchObject({ kind: 'replace', bolt: '2B' });
    expect(await turnOnce()).toMatchObject({ kind: 'bolt-replaced', data: { bolt: '2B' } });
    expect(state().bolts['2B']).toMatchObject({ condemned: undefined, replaced: 1, used: { new: 0 } });
    expect(next()).toMatchObject({ kind: 'stage', bolt: '2A', cycle: 0, stage: 0 });

    // The partner has seen both of its tightenings: the whole programme is counted before it starts again.
    await expect(turnOnce()).rejects.toThrow(/Bolt 2A has 0 tightenings left and the programme needs 2/);
    await tablet.record(
      job.id,
      {
        kind: 'bolt-replaced',
        step: TIGHTEN,
        data: { bolt: '2A', lot: 'B-9', reason: 'no tightenings left' },
      },
      { by: shop.people.ann },
    );
    while (next() !== null) await turnOnce();
    for (const bolt of ['2A', '2B'])
      expect(state().bolts[bolt]).toMatchObject({
        cyclesDone: 2,
        replaced: 1,
        used: { new: 2 },
        marked: { colour: expect.any(String) },
      });
    await sendAll();
    expect(await stateAtServer()).toEqual(state());

    // The signer counts eight marks, as there are, and the job goes on to its end.
    await workUntil('build.hand-over');
    await sendAll();
    expect((await stateAtServer()).signatures.find(({ step }) => step === HOLD)).toMatchObject({ count: 8 });
  });

  it('comes to the same by taking back “done, but wrong” what was first confirmed', async () => {
    await toLastAngle();
    const { id } = await turnOnce();
    await tablet.record(
      job.id,
      { kind: 'taken-back', step: TIGHTEN, data: { of: id, which: 'done, but wrong' } },
      { by: shop.people.ann },
    );
    expect(next()).toMatchObject({ kind: 'release', bolt: '2A' });
    expect(state().bolts['2A']?.marked).toBeUndefined();
    await turnOnce();
    expect(next()).toMatchObject({ kind: 'replace', bolt: '2B' });
    await sendAll();
    expect(await stateAtServer()).toEqual(state());
  });
});
