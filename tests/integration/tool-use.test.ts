import { describe, expect, it } from 'vitest';
import { GET as getUse } from '@/pages/api/tools/[id]/use';
import { POST as postCalibration } from '@/pages/api/tools/[id]/calibrations';
import { goodReadings } from '../support/calibration';
import { ask, enrolTestTablet, openShop, openTestJob } from '../support/tablet';

const DAY = 24 * 60 * 60 * 1000;

async function withUse() {
  const shop = await openShop();
  const { supervisor, ann } = shop.people;
  const tablet = await enrolTestTablet(shop, [supervisor, ann]);
  const job = await openTestJob(tablet, supervisor);
  const wrench = shop.kit.workshop.tools.find(({ kind }) => kind === 'torque wrench')!;
  const { id, name, serial, dueOn } = wrench;
  const params = { id };
  const takeWrench = async () => {
    const tool = { id, name, serial, dueOn };
    await tablet.record(job.id, { kind: 'tool-taken', data: { use: 'torque', tool } }, { by: ann });
    await tablet.sync();
  };
  const calibrate = (on: string, readings = goodReadings(wrench)) =>
    ask(postCalibration, {
      as: supervisor,
      params,
      body: { on, dueOn: '2032-01-01', certificate: 'C-1', readings },
    });
  return { shop, job, params, takeWrench, calibrate };
}

describe('what was done with a tool', () => {
  it('is listed since its last good calibration, and for a failed one from the good one before it', async () => {
    const { shop, job, params, takeWrench, calibrate } = await withUse();
    const { lead } = shop.people;
    const read = async () => (await ask(getUse, { as: lead, params })).body;
    const taken = (entries: number) => ({
      jobs: [{ job: job.id, steps: [{ step: null, title: 'taken in hand', entries }] }],
    });
    await takeWrench();
    await takeWrench();
    expect(await read()).toMatchObject({ periods: [{ since: '2031-01-10', until: null, ...taken(2) }] });

    expect((await calibrate('2031-05-06', [])).body).toMatchObject({ verdict: 'failed' });
    expect(await read()).toMatchObject({ periods: [{ since: '2031-01-10', until: null, ...taken(2) }] });

    shop.app.clock.advance(DAY);
    expect((await calibrate('2031-05-07')).body).toMatchObject({ verdict: 'passed' });
    expect(await read()).toMatchObject({
      periods: [
        { since: '2031-05-07', until: null, jobs: [] },
        { since: '2031-01-10', until: '2031-05-07', ...taken(2) },
      ],
    });
  });

  it('is not for those who see only their own jobs, and is of a tool that there is', async () => {
    const { shop, params } = await withUse();
    expect((await ask(getUse, { as: shop.people.ann, params })).status).toBe(403);
    expect((await ask(getUse, { as: shop.people.auditor, params })).status).toBe(200);
    expect((await ask(getUse, { as: shop.people.lead, params: { id: 'none' } })).status).toBe(404);
  });
});
