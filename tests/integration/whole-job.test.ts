import { describe, expect, it, vi } from 'vitest';
import { enrolTestTablet, openShop, openTestJob, setClocks, trailOf } from '../support/tablet';

// A whole workshop and its jobs are made for each of these; a busy machine takes its time.
vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

describe('a whole job on one tablet', () => {
  it('is recorded in order, every entry once, and ends handed over', async () => {
    const shop = await openShop();
    const { supervisor, ann } = shop.people;
    const tablet = await enrolTestTablet(shop, [supervisor, ann]);
    const job = await openTestJob(tablet, supervisor);
    await tablet.perform(job.id, { technician: ann, supervisor }, shop.kit);
    setClocks(tablet);
    const verdicts = await tablet.sync();
    expect(verdicts.filter(({ verdict }) => verdict !== 'recorded')).toEqual([]);
    expect(tablet.held(job.id).state.phase).toBe('handed over');
    const rows = await trailOf(shop.app, job.id);
    expect(rows.map(({ device_seq }) => device_seq)).toEqual(rows.map((_row, index) => index + 1));
  });
});
