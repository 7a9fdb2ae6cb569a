import { photosOf } from '@/domain/job-photos';
import { describe, expect, it } from 'vitest';
import { seedDemo } from '@db/seed';
import { nextSteps } from '@/domain/job';
import { verifyTrail } from '@/domain/trail';
import { getFold } from '@/server/job-fold';
import { exportTrail } from '@/server/job-export';
import { getPhoto } from '@/server/photos';
import { nodeChecks } from '@/server/trail-checks';
import { findActor } from '@/server/session';
import { openTestApp } from '../support/database';

describe('the demo’s jobs', () => {
  it('were done through the same door as real ones, and their trails hold', async () => {
    const app = await openTestApp();
    await seedDemo(app);
    const { db } = app;
    const jobs = await db.selectFrom('job').selectAll().orderBy('opened_at').execute();
    const states = await Promise.all(jobs.map(async ({ id }) => (await getFold(db, id)).state));
    expect(states.map(({ phase, plan }) => [plan.engine.code, phase])).toEqual([
      ['MS6-30', 'handed over'],
      ['MS6-30', 'running'],
      ['CV8-44', 'running'],
      ['MS6-30', 'running'],
    ]);
    const [finished, inCaps, atStart, inStripDown] = states;
    expect(finished?.signatures.map(({ holdPoint }) => holdPoint)).toEqual([
      'caps-marked',
      'clear-to-close',
      'clear-to-start',
    ]);
    expect(finished?.open).toEqual([]);
    const [inHand] = nextSteps(inCaps!);
    expect(inHand).toMatchObject({ kind: 'tighten', fit: 'final' });
    expect(inCaps?.steps[inHand!.id]?.status, 'in the middle of a cap').toBe('begun');
    expect(atStart?.count).toBeLessThan(10);
    expect(nextSteps(inStripDown!)[0]?.phase).toBe('strip-down');
    expect(await db.selectFrom('refused_entry').selectAll().execute()).toEqual([]);
    const conflicts = db.selectFrom('job_entry').select('id').where('body', 'like', '%"conflict"%');
    expect(await conflicts.execute()).toEqual([]);

    const owner = await db
      .selectFrom('person')
      .select('id')
      .where('email', 'like', 'owner@%')
      .executeTakeFirstOrThrow();
    const actor = await findActor(db, owner.id, undefined);
    for (const { id } of jobs) {
      const { text } = await exportTrail(app, actor!, id);
      expect(await verifyTrail(text, nodeChecks())).toMatchObject({ ok: true });
    }
    const photos = photosOf(finished!);
    expect(photos.length).toBeGreaterThan(3);
    for (const { hash } of photos) {
      expect((await getPhoto(app, actor!, hash, 'full')).type).toBe('image/jpeg');
    }
    const times = await db.selectFrom('workshop_entry').select('at').orderBy('seq').execute();
    expect(times.map(({ at }) => at)).toEqual(times.map(({ at }) => at).sort());
  }, 60_000);
});
