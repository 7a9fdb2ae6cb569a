import { expect, it, vi } from 'vitest';
import type * as Job from '@/domain/job';
import type { ScriptedEntry } from '@db/scripted-work';
import { enrolTestTablet, openShop, openTestJob, trailOf } from '../support/tablet';

vi.setConfig({ testTimeout: 30_000 });

/** A rule that is broken for one entry, as only a mistake in the program could make it. */
vi.mock('@/domain/job', async (original) => {
  const real = await original<typeof Job>();
  return {
    ...real,
    mayRecord: (...[state, entry, workshop]: Parameters<typeof real.mayRecord>) => {
      if (JSON.stringify(entry.data).includes('trips a rule up')) throw new Error('a mistake in the rules');
      return real.mayRecord(state, entry, workshop);
    },
  };
});

const remark = (words: string) =>
  ({ kind: 'deviation-raised', data: { class: 'C', words, blocks: false } }) satisfies Partial<ScriptedEntry>;

it('an entry that trips a rule up waits with what follows it, and what came before is kept', async () => {
  const shop = await openShop();
  const { supervisor, ann, ben } = shop.people;
  const tablet = await enrolTestTablet(shop, [supervisor, ann]);
  const other = await enrolTestTablet(shop, [ben]);
  const job = await openTestJob(tablet, supervisor);
  for (const words of ['one', 'this trips a rule up', 'three']) {
    await tablet.record(job.id, remark(words), { by: ann, force: true });
  }
  const verdicts = await tablet.sync();
  expect(verdicts).toMatchObject([
    { verdict: 'recorded' },
    { verdict: 'waiting', code: 'unexpected' },
    { verdict: 'waiting', code: 'earlier-missing' },
  ]);
  other.takeUp(job.id, job.plan);
  await other.sync();
  await other.record(job.id, remark('from another tablet'), { by: ben, force: true });
  expect(await other.sync()).toMatchObject([{ verdict: 'recorded' }]);
  const words = (await trailOf(shop.app, job.id)).map(
    ({ body }) => (JSON.parse(body) as { data: { words?: string } }).data.words,
  );
  expect(words.slice(1)).toEqual(['one', 'from another tablet']);
});
