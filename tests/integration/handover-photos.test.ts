import { rmSync } from 'node:fs';
import path from 'node:path';
import { beforeEach, describe, expect, it, vi } from 'vitest';
import { GET as getJob } from '@/pages/api/jobs/[id]/index';
import { photoName } from '@/domain/job-photos';
import type { ScriptedEntry } from '@db/scripted-work';
import {
  ask,
  enrolTestTablet,
  keepTestPhoto,
  type OpenedJob,
  openShop,
  openTestJob,
  photoHash,
  setClocks,
  type Shop,
  type TestTablet,
  trailOf,
} from '../support/tablet';

vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

const SUBJECT = 'arrival';
const STEP = 'strip.arrival';

let shop: Shop;
let tablet: TestTablet;
let job: OpenedJob;

beforeEach(async () => {
  shop = await openShop();
  const { supervisor, ann } = shop.people;
  tablet = await enrolTestTablet(shop, [supervisor, ann]);
  job = await openTestJob(tablet, supervisor, { photographs: false });
  const subjects = job.plan.steps.flatMap((step) => (step.kind === 'photograph' ? [step.subject] : []));
  for (const subject of subjects.filter((one) => one !== SUBJECT)) await keepTestPhoto(shop, subject);
});

/** Does the whole job on the tablet, up to its handover, and pushes it. */
async function handOver() {
  const { supervisor, ann } = shop.people;
  await tablet.perform(job.id, { technician: ann, supervisor }, shop.kit);
  setClocks(tablet);
  return (await tablet.sync()).filter(({ verdict }) => verdict !== 'recorded');
}

const kinds = async () => (await trailOf(shop.app, job.id)).map(({ kind }) => kind);

const jobPage = async () =>
  (await ask(getJob, { as: shop.people.supervisor, params: { id: job.id } })).body as {
    state: string;
    missingPhotographs: Record<string, unknown>[];
  };

const photographed = (photo: string, subject = SUBJECT) =>
  ({
    kind: 'photographed',
    step: STEP,
    data: { photo, bytes: 10, type: 'image/jpeg', from: 'camera here', subject },
  }) satisfies Partial<ScriptedEntry>;

describe('a handover', () => {
  it('waits for the bytes of a photograph, says for which and where they are, and goes in once they come', async () => {
    const [waiting, ...others] = await handOver();
    expect(others).toEqual([]);
    expect(waiting).toMatchObject({ verdict: 'waiting', code: 'photograph-missing' });
    const name = photoName(photoHash(SUBJECT));
    expect(waiting!.reason).toContain(`“${SUBJECT}” (${name}, on Tablet ${tablet.device.slice(-2)})`);
    expect(await kinds()).not.toContain('handed-over');
    expect(await jobPage()).toMatchObject({
      state: 'open',
      missingPhotographs: [{ subject: SUBJECT, name, isAwaited: true }],
    });
    await keepTestPhoto(shop, SUBJECT);
    expect(await tablet.sync()).toMatchObject([{ verdict: 'recorded' }]);
    expect(await jobPage()).toMatchObject({ state: 'handed over', missingPhotographs: [] });
  });

  it('waits also where only the bytes were lost and the row is left', async () => {
    await keepTestPhoto(shop, SUBJECT);
    const hash = photoHash(SUBJECT);
    rmSync(path.join(shop.app.settings.dataDir, 'photos', 'photos', hash.slice(0, 2), hash));
    expect(await handOver()).toMatchObject([{ verdict: 'waiting', code: 'photograph-missing' }]);
  });

  it('goes in once the photograph is taken again on another tablet', async () => {
    await handOver();
    const { ann } = shop.people;
    const other = await enrolTestTablet(shop, [ann]);
    other.now = tablet.now;
    other.takeUp(job.id, job.plan);
    await other.sync();
    await other.record(job.id, photographed(photoHash('again')), { by: ann });
    await other.sync();
    expect(await tablet.sync(), 'the new bytes have not come').toMatchObject([{ verdict: 'waiting' }]);
    await keepTestPhoto(shop, 'again');
    expect(await tablet.sync()).toMatchObject([{ verdict: 'recorded' }]);
    expect(await jobPage()).toMatchObject({ missingPhotographs: [{ subject: SUBJECT, isAwaited: false }] });
  });

  it('goes in once a deviation that names the photograph is disposed of', async () => {
    await handOver();
    const { supervisor } = shop.people;
    const other = await enrolTestTablet(shop, [supervisor]);
    other.now = tablet.now;
    other.takeUp(job.id, job.plan);
    await other.sync();
    const words = `${photoName(photoHash(SUBJECT))} is lost with its tablet`;
    const raised = await other.record(
      job.id,
      { kind: 'deviation-raised', data: { class: 'C', words, blocks: false } },
      { by: supervisor },
    );
    await other.sync();
    expect(await tablet.sync(), 'nobody has disposed of it').toMatchObject([{ verdict: 'waiting' }]);
    await other.record(
      job.id,
      {
        kind: 'deviation-disposed',
        data: { deviation: raised.id, disposition: 'accept as is', reason: 'seen on the vehicle' },
      },
      { by: supervisor },
    );
    await other.sync();
    expect(await tablet.sync()).toMatchObject([{ verdict: 'recorded' }]);
  });

  it('does not wait for a photograph that was taken again behind it on its own tablet, nor that one for it', async () => {
    await handOver();
    await keepTestPhoto(shop, 'again');
    await tablet.record(job.id, photographed(photoHash('again')), { by: shop.people.ann });
    expect(await tablet.sync()).toMatchObject([{ verdict: 'recorded' }, { verdict: 'recorded' }]);
    expect((await kinds()).slice(-2)).toEqual(['handed-over', 'photographed']);
  });

  it('waits on if what came behind it is of something else, or its signature is wrong', async () => {
    await handOver();
    await keepTestPhoto(shop, 'again');
    await tablet.record(job.id, photographed(photoHash('again'), 'a thumb'), { by: shop.people.ann });
    await tablet.record(job.id, photographed(photoHash('again')), { by: shop.people.ann });
    const row = tablet.held(job.id).outbox.at(-1)!;
    row.signature = `${row.signature.slice(0, -4)}AAAA`;
    expect(await tablet.sync()).toMatchObject([
      { verdict: 'waiting', code: 'photograph-missing' },
      { verdict: 'waiting', code: 'earlier-missing' },
      { verdict: 'waiting', code: 'earlier-missing' },
    ]);
    expect(await kinds()).not.toContain('handed-over');
  });
});
