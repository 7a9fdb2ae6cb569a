/* Judgements given at a desk, in Node's own world: its WebCrypto refuses the ArrayBuffer of a simulated browser. */
import 'fake-indexeddb/auto';
import { beforeEach, describe, expect, it, vi } from 'vitest';
import type { Entry, EntryData } from '@/domain/entry';
import { openBlockers } from '@/domain/job-order';
import { readKept, recordAtDesk, sendKept } from '@/offline/desk-record';
import { closeOffline } from '@/offline/offline';
import type { Draft } from '@/offline/record';
import { Bay } from '../support/bay';
import { Browser } from '../support/browser';
import { PIN, type Hand, type HandName, trailOf } from '../support/tablet';

// A whole workshop and its jobs are made for each of these; a busy machine takes its time.
vi.setConfig({ testTimeout: 60_000, hookTimeout: 60_000 });

const GAUGE = 'strip.gauge@rod2';
const HOLD = 'build.caps-marked';

let bay: Bay;
let desk: Browser;
beforeEach(async () => {
  bay = await Bay.open();
  desk = new Browser(bay.shop, 'desk');
  return () => closeOffline(desk.offline);
});

const hand = (name: HandName): Hand => bay.shop.people[name];

/** Somebody sits down at the desk and gives a judgement. */
async function judge(name: HandName, draft: Draft) {
  await desk.signIn(hand(name));
  return recordAtDesk(desk.offline, bay.job.id, draft, hand(name).id);
}

const countersign = (of: string, name: HandName, pin = PIN): Draft => ({
  kind: 'countersigned',
  data: { of, name: hand(name).name },
  pin,
});

const kinds = async () => (await bay.kinds()).slice(-2);

/** A reading outside its limits, which its author corrects to inside; the answer is the correction. */
async function correctedToInside(author: HandName = 'ann'): Promise<string> {
  await bay.workTo(GAUGE);
  const by = hand(author);
  const read: EntryData<'gauged'> = {
    end: 'front',
    by: 'band',
    clearance: '0.800',
    uncertainty: '0.005',
    unit: 'mm',
    again: 'first',
    threadLot: 'G-1',
    cardLot: 'G-1',
  };
  const { id: of } = await bay.tablet.record(bay.job.id, { kind: 'gauged', step: GAUGE, data: read }, { by });
  const data = {
    of,
    class: 'substantive',
    reason: 'misread',
    data: { ...read, clearance: '0.048' },
  } as const;
  const correction = await bay.tablet.record(bay.job.id, { kind: 'corrected', step: GAUGE, data }, { by });
  await bay.tablet.sync();
  expect(openBlockers(await bay.stateOnServer())).toMatchObject([{ rule: 'clearance-outside' }]);
  return correction.id;
}

describe('a supervisor at a desk', () => {
  it('countersigns a correction, and only then the deviation on the earlier value rests', async () => {
    const of = await correctedToInside();
    expect(await judge('supervisor', countersign(of, 'supervisor'))).toEqual({ ok: true });
    const state = await bay.stateOnServer();
    expect(openBlockers(state)).toEqual([]);
    expect(state.countersigns).toMatchObject([{ correction: of, countersignedBy: hand('supervisor').id }]);
    const last = JSON.parse((await trailOf(bay.shop.app, bay.job.id)).at(-1)!.body) as Entry;
    expect(last).toMatchObject({
      kind: 'countersigned',
      by: hand('supervisor').id,
      pin: { checkedAt: expect.any(String) },
    });
    expect(last.device).not.toBe(bay.tablet.device);
  });

  it('revokes the signature of a hold point, which opens again with what was done past it', async () => {
    await bay.workTo(HOLD, hand('lead'));
    await bay.workTo('build.sump-on');
    const before = await bay.stateOnServer();
    const { entry: of } = before.signatures.find(({ step }) => step === HOLD)!;
    const draft: Draft = { kind: 'revoked', data: { of, reason: 'the marks were not those of the plan' } };
    expect(await judge('supervisor', draft)).toEqual({ ok: true });
    const { signatures, steps } = await bay.stateOnServer();
    expect(steps[HOLD]?.status).toBe('open');
    expect(signatures.find(({ entry }) => entry === of)).toMatchObject({
      reopened: 'revoked: the marks were not those of the plan',
      donePast: expect.arrayContaining(['build.rags-in']),
    });
    expect(await judge('supervisor', draft)).toMatchObject({ ok: false, code: 'already-open' });
  });

  it('with a wrong PIN is refused and told so, and the attempt is counted', async () => {
    const of = await correctedToInside();
    const outcome = await judge('supervisor', countersign(of, 'supervisor', '999999'));
    expect(outcome).toEqual({ ok: false, code: 'pin-wrong', why: 'The PIN was wrong. Sign again.' });
    expect(openBlockers(await bay.stateOnServer())).toHaveLength(1);
    const attempts = await bay.shop.app.db.selectFrom('pin_attempt').selectAll().execute();
    expect(attempts).toMatchObject([{ person_id: hand('supervisor').id }]);
    expect(await kinds()).toContain('refused');
    expect(await judge('supervisor', countersign(of, 'supervisor'))).toEqual({ ok: true });
  });

  it('whose PIN is locked is told until when, and the judgement waits', async () => {
    const of = await correctedToInside();
    for (const pin of ['111111', '222222', '333333', '444444', '555555'])
      expect(await judge('supervisor', countersign(of, 'supervisor', pin))).toMatchObject({
        code: 'pin-wrong',
      });
    expect(await judge('supervisor', countersign(of, 'supervisor'))).toMatchObject({
      code: 'kept',
      why: expect.stringMatching(/PIN is locked until \d\d:\d\d\. The record waits and goes in by itself\./),
    });
    expect(await readKept(desk.offline, bay.job.id)).toMatchObject({
      count: 1,
      reason: expect.stringContaining('locked'),
    });
    desk.pass(20 * 60_000);
    expect(await desk.offline.sync.now()).toEqual({ ok: true });
    expect(openBlockers(await bay.stateOnServer())).toEqual([]);
  });

  it('who made the correction does not countersign it, and nor does whoever worked on the step', async () => {
    const of = await correctedToInside('supervisor');
    expect(await judge('supervisor', countersign(of, 'supervisor'))).toMatchObject({ code: 'own-work' });
    expect(await readKept(desk.offline, bay.job.id)).toMatchObject({ count: 0 });
    expect(await judge('lead', countersign(of, 'lead'))).toEqual({ ok: true });
  });
});

describe('a technician at a desk', () => {
  it('neither countersigns nor revokes, and nothing of it reaches the server', async () => {
    const of = await correctedToInside();
    const before = await bay.kinds();
    expect(await judge('ben', countersign(of, 'ben'))).toMatchObject({ ok: false, code: 'role' });
    expect(await judge('ben', { kind: 'revoked', data: { of, reason: 'x' } })).toMatchObject({
      code: 'role',
    });
    expect(await bay.kinds()).toEqual(before);
  });

  it('is refused by the server too, whatever a browser thinks of it', async () => {
    const of = await correctedToInside();
    const made = { kind: 'countersigned', data: { of, name: hand('ben').name } } as const;
    expect(await bay.pushed(made, hand('ben'))).toMatchObject({ verdict: 'refused', code: 'role' });
    expect(openBlockers(await bay.stateOnServer())).toHaveLength(1);
  });
});

describe('a browser', () => {
  it('without a key of the person, or unknown to the workshop, signs nothing and says what to do', async () => {
    const of = await correctedToInside();
    const { id } = hand('supervisor');
    const draft = countersign(of, 'supervisor');
    expect(await recordAtDesk(desk.offline, bay.job.id, draft, id)).toMatchObject({
      code: 'not-ready',
      why: expect.stringContaining('Sign in here once more'),
    });
    await desk.signIn(hand('lead'));
    expect(await recordAtDesk(desk.offline, bay.job.id, draft, id)).toMatchObject({
      code: 'no-key',
      why: expect.stringContaining('Sign in'),
    });
  });
});

describe('a network that fails', () => {
  it('before anything is signed leaves nothing behind, and says so', async () => {
    const of = await correctedToInside();
    await desk.signIn(hand('supervisor'));
    desk.isAway = true;
    const draft = countersign(of, 'supervisor');
    expect(await recordAtDesk(desk.offline, bay.job.id, draft, hand('supervisor').id)).toEqual({
      ok: false,
      code: 'no-network',
      why: 'The server was not reached.',
    });
    expect(await desk.offline.db.outbox.count()).toBe(0);
  });

  it('once it is signed keeps it, says that it is kept, and sends it later: once', async () => {
    const of = await correctedToInside();
    desk.isCut = (path, body) => path === '/api/sync' && body.includes('countersigned');
    const outcome = await judge('supervisor', countersign(of, 'supervisor'));
    expect(outcome).toMatchObject({ ok: false, code: 'kept', why: 'The server was not reached.' });
    expect(await readKept(desk.offline, bay.job.id)).toMatchObject({ count: 1 });
    expect(openBlockers(await bay.stateOnServer())).toHaveLength(1);
    const kept = outcome.ok ? [] : (outcome.kept ?? []);
    expect(await sendKept(desk.offline, bay.job.id, kept)).toMatchObject({ code: 'kept', kept });
    desk.isCut = () => false;
    expect(await sendKept(desk.offline, bay.job.id, kept)).toEqual({ ok: true });
    expect(await readKept(desk.offline, bay.job.id)).toMatchObject({ count: 0 });
    expect((await bay.kinds()).filter((kind) => kind === 'countersigned')).toHaveLength(1);
  });

  it('after the server has it asks again and hears that it is recorded', async () => {
    const of = await correctedToInside();
    desk.isCut = (path, body) => {
      if (path === '/api/sync' && body.includes('countersigned')) desk.lostReplies = 1;
      return false;
    };
    const outcome = await judge('supervisor', countersign(of, 'supervisor'));
    expect(outcome).toMatchObject({ code: 'kept' });
    expect(openBlockers(await bay.stateOnServer())).toEqual([]);
    desk.isCut = () => false;
    const kept = outcome.ok ? [] : (outcome.kept ?? []);
    expect(await sendKept(desk.offline, bay.job.id, kept)).toEqual({ ok: true });
    expect((await bay.kinds()).filter((kind) => kind === 'countersigned')).toHaveLength(1);
  });

  it('that kept a wrong PIN tells of it when it is sent', async () => {
    const of = await correctedToInside();
    desk.isCut = (path, body) => path === '/api/sync' && body.includes('countersigned');
    const outcome = await judge('supervisor', countersign(of, 'supervisor', '999999'));
    desk.isCut = () => false;
    const kept = outcome.ok ? [] : (outcome.kept ?? []);
    expect(await sendKept(desk.offline, bay.job.id, kept)).toMatchObject({ code: 'pin-wrong' });
  });
});
