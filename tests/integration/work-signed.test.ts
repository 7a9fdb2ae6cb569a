import { beforeEach, describe, expect, it, vi } from 'vitest';
import { evidenceDigest } from '@/domain/job-evidence';
import { unsignedWork } from '@/domain/job-work';
import { PATCH as patchDevice } from '@/pages/api/devices/[id]';
import { sha256Hex } from '@/server/crypto';
import type { EntryData } from '@/domain/entry';
import { Bay } from '../support/bay';
import { ask, enrolTestTablet, type TestTablet } from '../support/tablet';

// A whole workshop and its jobs are made for each of these; a busy machine takes its time.
vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

type Coverage = EntryData<'work-signed'>['covers'];

const HOLD = 'build.caps-marked';
const RAGS = { kind: 'counted', step: 'strip.rags-out', data: { count: 12 } } as const;

let bay: Bay;
beforeEach(async () => {
  bay = await Bay.open();
});

const ann = () => bay.shop.people.ann;
const unsigned = async () => unsignedWork(await bay.stateOnServer(), ann().id).length;

/** What Ann recorded on these tablets and has not signed for, whether or not it was sent. */
function coverageOf(...tablets: TestTablet[]): Coverage {
  const upTo: Record<string, number> = {};
  const hashes = tablets.flatMap((tablet) =>
    unsignedWork(tablet.held(bay.job.id).state, ann().id).flatMap(({ id, device, deviceSeq }) => {
      if (device !== tablet.device) return [];
      upTo[device] = Math.max(upTo[device] ?? 0, deviceSeq);
      return tablet.held(bay.job.id).hashes.get(id) ?? [];
    }),
  );
  return { upTo, count: hashes.length, digest: evidenceDigest(hashes, sha256Hex) };
}

/** Another tablet, on which Ann did the next step and has not sent it. */
async function secondTablet(): Promise<TestTablet> {
  await bay.workTo('strip.rags-out');
  const second = await enrolTestTablet(bay.shop, [ann()]);
  second.takeUp(bay.job.id, bay.job.plan);
  await second.sync();
  await second.record(bay.job.id, RAGS, { by: ann() });
  return second;
}

const workSigned = (covers: Coverage) => ({ kind: 'work-signed', data: { covers } }) as const;

describe('a signature for one’s own work', () => {
  it('is recorded where its digest is that of the entries that it covers', async () => {
    await bay.workTo('strip.gauge@rod2');
    expect(await unsigned()).toBeGreaterThan(5);
    expect(await bay.pushed(workSigned(coverageOf(bay.tablet)), ann())).toMatchObject({
      verdict: 'recorded',
    });
    expect(await unsigned()).toBe(0);
  });

  it('is refused in words where its digest is of anything else, and can be made anew', async () => {
    await bay.workTo('strip.gauge@rod2');
    const right = coverageOf(bay.tablet);
    const [other = ''] = bay.tablet.held(bay.job.id).hashes.values();
    for (const digest of [
      'e'.repeat(64),
      evidenceDigest(Array<string>(right.count).fill(other), sha256Hex),
    ]) {
      const verdict = await bay.pushed(workSigned({ ...right, digest }), ann());
      expect(verdict).toMatchObject({
        verdict: 'refused',
        code: 'digest-differs',
        reason: expect.stringContaining('is not what you recorded'),
      });
    }
    expect((await bay.kinds()).at(-1)).toBe('refused');
    expect(await bay.pushed(workSigned(coverageOf(bay.tablet)), ann())).toMatchObject({
      verdict: 'recorded',
    });
  });

  it('that was refused counts for nothing: a class A hold point asks for another', async () => {
    await bay.workTo(HOLD, bay.shop.people.lead);
    const covers = { ...coverageOf(bay.tablet), digest: 'e'.repeat(64) };
    expect(await bay.pushed(workSigned(covers), ann())).toMatchObject({ code: 'digest-differs' });
    expect(await unsigned()).toBe(covers.count);
    const verdict = await bay.pushedSignature(HOLD, bay.shop.people.supervisor);
    expect(verdict).toMatchObject({ verdict: 'recorded' });
    const kinds = await bay.kinds();
    // The tablet asked Ann again before the hold point was signed.
    expect(kinds.slice(-3)).toEqual(['refused', 'work-signed', 'signed']);
  });

  it('waits for numbers of another tablet that have not come, and is judged once they are there', async () => {
    const second = await secondTablet();
    const covers = coverageOf(bay.tablet, second);
    expect(covers.count).toBeGreaterThan(1);
    expect(await bay.pushed(workSigned(covers), ann())).toMatchObject({
      verdict: 'waiting',
      code: 'evidence-missing',
    });
    await second.sync();
    expect(await bay.last()).toMatchObject({ verdict: 'recorded' });
    expect(await unsigned()).toBe(0);
  });

  it('is refused where such numbers never come, because their tablet is lost', async () => {
    const second = await secondTablet();
    await ask(patchDevice, {
      method: 'PATCH',
      as: bay.shop.people.supervisor,
      params: { id: second.device },
      body: { state: 'lost', reason: 'left in a van' },
    });
    const verdict = await bay.pushed(workSigned(coverageOf(bay.tablet, second)), ann());
    expect(verdict).toMatchObject({
      verdict: 'refused',
      reason: expect.stringContaining('was declared lost'),
    });
  });

  it('is refused where it names a tablet that the workshop does not know, or numbers to come', async () => {
    await bay.workTo('strip.gauge@rod2');
    const right = coverageOf(bay.tablet);
    for (const upTo of [{ ...right.upTo, nowhere: 3 }, { [bay.tablet.device]: 9999 }]) {
      expect(await bay.pushed(workSigned({ ...right, upTo }), ann())).toMatchObject({
        verdict: 'refused',
        code: 'work-to-come',
      });
    }
  });
});
