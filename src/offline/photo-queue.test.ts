import { expect, it } from 'vitest';
import { OfflineServer } from '../../tests/support/offline-server';
import { openTablet, photographed, picture, recorded } from '../../tests/support/offline-tablet';
import { smallPlan } from '../../tests/support/small-documents';
import { recordEntries } from './record';

it('photographs go also while something else of the sync fails: a handover may wait for them', async () => {
  const server = new OfflineServer();
  const job = server.addJob(smallPlan());
  const { offline } = await openTablet(server, { job });
  const photo = picture('arrival');
  recorded(await recordEntries(offline, job, [photographed(photo)], { by: 'tech', photos: [photo] }));
  server.movePlan(job, { ...smallPlan(), options: { plate: 'none' } });
  // The plan that the job was moved to cannot be had.
  Object.assign(server, { plans: new Map() });
  expect(await offline.sync.now()).toMatchObject({ ok: false });
  expect([...server.photos.keys()]).toEqual([photo.hash]);
});
