/* What pages carry, against the real handlers: only the network between them is fake. */
import 'fake-indexeddb/auto';
import { createHash } from 'node:crypto';
import { beforeEach, describe, expect, it } from 'vitest';
import { nextSteps } from '@/domain/job';
import type { JobState } from '@/domain/job-state';
import type { PlanStep } from '@/domain/plan';
import { coverageOf } from '@/offline/evidence';
import type { PreparedPhoto } from '@/offline/photo';
import { keepOpenJobsOffline, listJobs, makeAvailableOffline } from '@/offline/prefetch';
import { recordEntries, type Draft } from '@/offline/record';
import { forgetSignIn, readTablet } from '@/offline/tablet';
import { changeDevice } from '@/server/device-changes';
import { nextScripted, scriptedSignature, type Kit } from '@db/scripted-work';
import sharp from 'sharp';
import { signWorkOf, signWorkUnder } from '../support/sign-work';
import { must, recorded } from '../support/offline-tablet';
import { Browser, openAtDesk } from '../support/browser';
import { openShop, PIN, trailOf, type Hand, type Shop } from '../support/tablet';

let shop: Shop;
beforeEach(async () => {
  shop = await openShop();
});

const photos = new Map<string, PreparedPhoto>();

/** A real small picture for each subject, so that the server can see that it is one. */
async function developPhotos(subjects: readonly string[]): Promise<void> {
  for (const [index, subject] of subjects.entries()) {
    const background = { r: index * 20, g: 90, b: 120 };
    const picture = await sharp({ create: { width: 8, height: 6, channels: 3, background } })
      .jpeg()
      .toBuffer();
    const bytes = new Uint8Array(picture);
    const hash = createHash('sha256').update(bytes).digest('hex');
    photos.set(subject, { hash, bytes: bytes.buffer, type: 'image/jpeg', width: 8, height: 6 });
  }
}

function kitOf(): Kit {
  return {
    ...shop.kit,
    photo: (subject) => {
      const photo = photos.get(subject)!;
      return { hash: photo.hash, bytes: photo.bytes.byteLength, type: photo.type };
    },
  };
}

function nextStep(state: JobState): PlanStep | undefined {
  const [step] = nextSteps(state).filter(
    (one) => one.kind !== 'witness' || state.steps[one.id]?.status === 'open',
  );
  const blocking = state.deviations.find((one) => one.blocks && !one.disposed && one.step !== undefined);
  return step ?? state.plan.steps.find(({ id }) => id === blocking?.step);
}

/** Does what comes next, as a technician and a supervisor would; false when nothing is left or must wait. */
async function doNext(browser: Browser, job: string, technician: Hand, signs = true): Promise<boolean> {
  const { offline } = browser;
  const view = offline.jobs.get(job) ?? (await offline.jobs.open(job));
  const step = nextStep(view.state);
  if (!step) return false;
  const { supervisor } = shop.people;
  const workshop = (await offline.db.workshop.get('workshop'))!;
  const next = nextScripted(view.state, step, { ...kitOf(), workshop });
  if (next) {
    browser.pass(next.afterMs);
    const { kind, data, step: on } = next;
    const draft = { kind, data, step: on } as Draft;
    const taken = draft.kind === 'photographed' ? [photoOf(draft.data.photo)] : [];
    const by = next.part === 'technician' ? technician.id : supervisor.id;
    recorded(await recordEntries(offline, job, [draft], { by, photos: taken }));
    return true;
  }
  if (step.kind !== 'hold' || !signs) return false;
  browser.pass(4 * 60_000);
  await signWorkUnder(offline, job, step.id);
  const covers = await coverageOf(offline, view, step.id);
  const data = { ...scriptedSignature(view.state, step, supervisor), covers };
  const draft: Draft = { kind: 'signed', step: step.id, data, pin: PIN };
  recorded(await recordEntries(offline, job, [draft], { by: supervisor.id }));
  return true;
}

function photoOf(hash: string): PreparedPhoto {
  return [...photos.values()].find((photo) => photo.hash === hash)!;
}

async function doMany(browser: Browser, job: string, technician: Hand, count: number): Promise<void> {
  for (let n = 0; n < count; n += 1) expect(await doNext(browser, job, technician)).toBe(true);
}

/** The server holds exactly what this browser holds, and nothing is left to send. */
async function expectSame(browser: Browser, job: string): Promise<void> {
  const rows = await trailOf(shop.app, job);
  const entries = await browser.offline.db.entries.filter((row) => row.job === job).sortBy('seq');
  expect(entries.map(({ hash }) => hash)).toEqual(rows.map(({ hash }) => hash));
  expect(await browser.offline.db.outbox.count()).toBe(0);
  expect(await browser.offline.db.refused.count()).toBe(0);
}

describe('a tablet and the server', () => {
  it('run a whole job with the network gone for most of it', async () => {
    const { supervisor, ann, ben } = shop.people;
    const job = await openAtDesk(new Browser(shop, 'desk'));
    const tablet = new Browser(shop, 'tablet');
    for (const person of [supervisor, ann, ben]) await tablet.signIn(person);
    must(await keepOpenJobsOffline(tablet.offline, ann.id));
    const view = await tablet.offline.jobs.open(job);
    const subjects = view.state.plan.steps.flatMap((step) =>
      step.kind === 'photograph' ? [step.subject] : [],
    );
    await developPhotos(subjects);

    tablet.isAway = true;
    await doMany(tablet, job, ann, 40);
    await signWorkOf(tablet.offline, job, ann.id);
    await forgetSignIn(tablet.offline, ann.id);
    tablet.session = undefined;
    while (await doNext(tablet, job, ben)) {
      const now = tablet.offline.jobs.get(job)!;
      const waits = now.state.signatures.some(
        ({ checkedAt, step }) => checkedAt === undefined && isWait(now.state, step),
      );
      if (!waits) continue;
      // The route says that this signature is waited for: the network comes back for a moment.
      tablet.isAway = false;
      tablet.lostReplies = 1;
      expect(await tablet.offline.sync.now()).toMatchObject({ ok: false });
      must(await tablet.offline.sync.now());
      const heard = await tablet.offline.jobs.refresh(job);
      expect(heard.pending.map(({ reason }) => reason)).toEqual([]);
      tablet.isAway = true;
    }
    tablet.isAway = false;
    must(await tablet.offline.sync.now());

    const after = await tablet.offline.jobs.refresh(job);
    expect(after.state.phase).toBe('handed over');
    await expectSame(tablet, job);
    const rows = await trailOf(shop.app, job);
    const own = rows.filter(({ device_id }) => device_id !== rows[0]!.device_id);
    expect(own.map(({ device_seq }) => device_seq)).toEqual(own.map((_row, index) => index + 1));
    expect(own.slice(0, 40).filter(({ by_person }) => by_person === ann.id).length).toBeGreaterThan(30);
    const stored = await shop.app.db.selectFrom('photo').select('hash').execute();
    expect(stored.map(({ hash }) => hash).sort()).toEqual(
      [...photos.values()].map(({ hash }) => hash).sort(),
    );
  }, 120_000);

  it('agree about a wrong PIN, and about the next try', async () => {
    const { supervisor, ann } = shop.people;
    const tablet = new Browser(shop, 'tablet');
    const job = await openAtDesk(new Browser(shop, 'desk'));
    for (const person of [supervisor, ann]) await tablet.signIn(person);
    must(await makeAvailableOffline(tablet.offline, job));
    const { state } = await tablet.offline.jobs.open(job);
    await developPhotos(
      state.plan.steps.flatMap((step) => (step.kind === 'photograph' ? [step.subject] : [])),
    );
    while (await doNext(tablet, job, ann, false));
    const view = tablet.offline.jobs.get(job)!;
    const step = nextStep(view.state)!;
    if (step.kind !== 'hold') throw new Error(`${step.id} is no hold point`);
    await signWorkUnder(tablet.offline, job, step.id);
    const data = {
      ...scriptedSignature(view.state, step, supervisor),
      covers: await coverageOf(tablet.offline, view, step.id),
    };
    recorded(
      await recordEntries(tablet.offline, job, [{ kind: 'signed', step: step.id, data, pin: '999999' }], {
        by: supervisor.id,
      }),
    );
    must(await tablet.offline.sync.now());
    const refused = await tablet.offline.jobs.refresh(job);
    expect(refused.refused).toMatchObject([{ code: 'pin-wrong' }]);
    expect(await doNext(tablet, job, ann)).toBe(true);
    must(await tablet.offline.sync.now());
    const signed = await tablet.offline.jobs.refresh(job);
    expect(signed.state.signatures).toMatchObject([{ by: supervisor.id, checkedAt: expect.any(String) }]);
  }, 60_000);

  it('bring two tablets to the same state', async () => {
    const { ann, ben } = shop.people;
    const job = await openAtDesk(new Browser(shop, 'desk'));
    const [first, second] = [new Browser(shop, 'first'), new Browser(shop, 'second')];
    await first.signIn(ann);
    await second.signIn(ben);
    for (const tablet of [first, second]) must(await makeAvailableOffline(tablet.offline, job));
    const remark = (words: string): Draft => ({
      kind: 'deviation-raised',
      data: { class: 'C', words, blocks: false },
    });
    for (let n = 0; n < 5; n += 1) {
      recorded(await recordEntries(first.offline, job, [remark(`first ${n}`)], { by: ann.id }));
      recorded(await recordEntries(second.offline, job, [remark(`second ${n}`)], { by: ben.id }));
    }
    for (const tablet of [first, second, first]) must(await tablet.offline.sync.now());
    const [a, b] = [await first.offline.jobs.refresh(job), await second.offline.jobs.refresh(job)];
    expect(a.state).toEqual(b.state);
    expect(a.state.deviations).toHaveLength(10);
    await expectSame(first, job);
  });

  it('lose nothing when a tablet is declared lost and enrolled again', async () => {
    const { ann, owner } = shop.people;
    const job = await openAtDesk(new Browser(shop, 'desk'));
    const tablet = new Browser(shop, 'tablet');
    await tablet.signIn(ann);
    must(await makeAvailableOffline(tablet.offline, job));
    const remark: Draft = { kind: 'deviation-raised', data: { class: 'C', words: 'before', blocks: false } };
    recorded(await recordEntries(tablet.offline, job, [remark], { by: ann.id }));
    const { id } = await readTablet(tablet.offline);
    await changeDevice(shop.app, owner, id, { state: 'lost', reason: 'left in a van' });
    expect(await tablet.offline.sync.now()).toMatchObject({
      code: 'lost-tablet',
      why: expect.stringContaining('declared lost'),
    });
    await tablet.signIn(ann);
    recorded(await recordEntries(tablet.offline, job, [remark], { by: ann.id }));
    must(await tablet.offline.sync.now());
    await expectSame(tablet, job);
    expect((await trailOf(shop.app, job)).map(({ kind }) => kind)).toEqual([
      'opened',
      'deviation-raised',
      'deviation-raised',
    ]);
    expect(await listJobs(tablet.offline)).toMatchObject([{ have: { seq: 3 } }]);
  });
});

function isWait(state: JobState, stepId: string): boolean {
  const step = state.plan.steps.find(({ id }) => id === stepId);
  return step?.kind === 'hold' && step.offline === 'wait';
}
