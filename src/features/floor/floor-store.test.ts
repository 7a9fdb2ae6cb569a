import { beforeEach, describe, expect, it } from 'vitest';
import { setWorking } from '@/offline/tablet';
import { OfflineServer } from '../../../tests/support/offline-server';
import { firstWork, killAndReopen, openTablet, picture } from '../../../tests/support/offline-tablet';
import { smallPlan } from '../../../tests/support/small-documents';
import type { Draft } from '@/offline/record';
import { currentStep } from './current-step';
import { createFloorStore } from './floor-store';

let server: OfflineServer;
let job: string;
beforeEach(() => {
  server = new OfflineServer();
  job = server.addJob(smallPlan());
});

const rags: Draft = { kind: 'counted', step: 'strip.rags-out', data: { count: 12 } };
const kit: Draft = { kind: 'fitted', step: 'strip.old-shell-kit', data: { count: 8, lot: 'S-1' } };

/** A tablet without a network, somebody working on it, and the job open. */
async function openFloor() {
  const { tablet, offline } = await openTablet(server, { people: ['tech', 'mate'], job });
  server.isAway = true;
  await setWorking(offline, 'tech');
  const store = createFloorStore(offline);
  await store.getState().reload();
  await store.getState().openJob(job);
  /** The half second is over. */
  const settle = () => {
    for (const timer of tablet.timers.splice(0)) timer.then();
  };
  return { tablet, offline, store, settle };
}

describe('the Floor between two touches', () => {
  it('reads people, tools and jobs from the tablet alone', async () => {
    const { store } = await openFloor();
    const { signedIn, working, jobs, workshop } = store.getState();
    expect(signedIn.map(({ person }) => person)).toEqual(['mate', 'tech']);
    expect(working).toBe('tech');
    expect(jobs).toMatchObject([{ id: job, availableOffline: true }]);
    expect(workshop?.tools.length).toBeGreaterThan(0);
  });

  it('moves on only after the record is on the disk', async () => {
    const { store, offline } = await openFloor();
    const done = store.getState().record([rags]);
    expect(store.getState()).toMatchObject({ flash: 0, isRecording: false });
    expect(await store.getState().record([kit])).toBe(false);
    expect(await done).toBe(true);
    expect(await offline.db.outbox.count()).toBe(1);
    expect(store.getState()).toMatchObject({ flash: 1, isRecording: false });
    expect(store.getState().view?.state.tallies.rags).toEqual({ out: 12 });
  });

  it('says that it is writing only where the disk is slow', async () => {
    const { store, settle } = await openFloor();
    const done = store.getState().record([rags]);
    settle();
    expect(store.getState().isRecording).toBe(true);
    expect(await done).toBe(true);
    expect(store.getState().isRecording).toBe(false);
  });

  it('does not count a second touch within half a second', async () => {
    const { store, offline, settle } = await openFloor();
    await store.getState().record([rags]);
    expect(await store.getState().record([kit])).toBe(false);
    expect(await offline.db.outbox.count()).toBe(1);
    settle();
    expect(await store.getState().record([kit])).toBe(true);
  });

  it('stays where it is and says why when the rules refuse', async () => {
    const { store, offline } = await openFloor();
    const ahead: Draft = { kind: 'turned', step: 'build.turns', data: { fullTurns: 2 } };
    expect(await store.getState().record([ahead])).toBe(false);
    expect(store.getState().refusal?.why).toMatch(/comes first/);
    expect(await offline.db.outbox.count()).toBe(0);
    expect(store.getState().flash).toBe(0);
  });

  it('records helpers as authors, and the signer of another name alone', async () => {
    const { store } = await openFloor();
    store.getState().setHelpers(['mate']);
    await store.getState().record([rags]);
    expect(store.getState().view?.pending.at(-1)?.entry.with).toEqual(['mate']);
  });

  it('carries "recorded afterwards" on the next touch only', async () => {
    const { store, settle } = await openFloor();
    store.getState().setAfterwards({ when: 'an hour ago', reason: 'both hands were needed' });
    await store.getState().record([rags]);
    settle();
    await store.getState().record([kit]);
    const entries = store.getState().view!.pending.map(({ entry }) => entry.afterwards);
    expect(entries).toEqual([{ when: 'an hour ago', reason: 'both hands were needed' }, undefined]);
  });

  it('comes back to the same place after the browser was killed, and asks about the action that stood there', async () => {
    const { tablet, offline, store } = await openFloor();
    store.getState().goTo('strip.old-shell-kit');
    store.getState().showAction('1A.0.2');
    await new Promise((resolve) => setTimeout(resolve, 20));
    const again = createFloorStore(killAndReopen(tablet, offline));
    await again.getState().reload();
    await again.getState().openJob(job);
    const { place, isAway, view } = again.getState();
    expect(place).toEqual({ step: 'strip.old-shell-kit', isVisit: true, action: '1A.0.2' });
    expect(isAway).toBe(true);
    expect(currentStep(view!.state, place)?.id).toBe('strip.old-shell-kit');
    again.getState().showAction('1B.0.2');
    expect(again.getState().isAway).toBe(false);
  });

  it('asks about the action on the screen after somebody else took over', async () => {
    const { store, settle } = await openFloor();
    await store.getState().record([rags]);
    settle();
    store.getState().showAction('1A.0.2');
    const over: Draft = { kind: 'took-over', data: { from: 'tech', firstOfShift: false } };
    expect(await store.getState().record([over], { by: 'mate' })).toBe(true);
    expect(store.getState().isAway).toBe(true);
    settle();
    await store.getState().record([kit]);
    expect(store.getState().isAway).toBe(false);
  });

  it('shows what comes of parking a job, whichever step it was said on', async () => {
    const { store, settle, tablet } = await openFloor();
    const [photo, ...rest] = firstWork(6);
    for (const draft of [photo!, ...rest]) {
      tablet.now += 5000;
      const photos = draft.kind === 'photographed' ? [picture(draft.step ?? '')] : [];
      await store.getState().record([draft], { photos });
      settle();
    }
    store.getState().goTo('strip.park');
    const { view } = store.getState();
    const park = view!.state.plan.steps.find(({ id }) => id === 'strip.park');
    const checks = park && 'checks' in park ? park.checks.map(({ id }) => ({ id, ok: true })) : [];
    expect(await store.getState().record([{ kind: 'parked', step: 'strip.park', data: { checks } }])).toBe(
      true,
    );
    const { view: after, place } = store.getState();
    expect(after!.state.phase).toBe('parked');
    expect(currentStep(after!.state, place)?.kind).toBe('resume');
  });

  it('goes through the first work of a job without a network', async () => {
    const { store, settle, tablet } = await openFloor();
    const drafts = firstWork(6);
    for (const draft of drafts) {
      tablet.now += 5000;
      const photos = draft.kind === 'photographed' ? [picture(draft.step ?? '')] : [];
      expect(await store.getState().record([draft], { photos })).toBe(true);
      settle();
    }
    expect(store.getState().view?.pending).toHaveLength(drafts.length);
  });

  it('says in words that a job is not on this tablet', async () => {
    const { store } = await openFloor();
    await store.getState().openJob('0190a0a0-0000-7000-8000-00000000dead');
    expect(store.getState().trouble).toMatch(/not on this tablet/);
  });
});
