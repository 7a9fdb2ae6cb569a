import { describe, expect, it } from 'vitest';
import { POST as postCalibration } from '@/pages/api/tools/[id]/calibrations';
import { GET as getTool, PATCH as patchTool } from '@/pages/api/tools/[id]/index';
import { GET as getTools, POST as postTools } from '@/pages/api/tools/index';
import { openTestApp } from '../support/database';
import { addTestPeople, signIn } from '../support/requests';

const staff = { ines: ['technician'], sup: ['supervisor'], auditor: ['auditor'] } as const;
const wrench = {
  name: 'Torque wrench',
  kind: 'torque wrench',
  serial: 'TT-1',
  rangeLow: '4',
  rangeHigh: '25',
  unit: 'N·m',
};
const calibration = {
  on: '2031-05-01',
  dueOn: '2032-05-01',
  certificate: 'C-77',
  readings: [{ set: '5.0', reference: '5.1', unit: 'N·m' }],
};

async function withWrench() {
  const app = await openTestApp();
  const people = await addTestPeople(app, staff);
  const office = await signIn(people.sup);
  const { body } = await office.ask(postTools, { body: wrench });
  return { app, office, params: { id: (body as { id: string }).id }, ...people };
}

describe('tools', () => {
  it('are added by a supervisor and read by everybody', async () => {
    const { ines, auditor } = await withWrench();
    for (const person of [ines, auditor]) {
      const browser = await signIn(person);
      expect((await browser.ask(getTools)).body).toMatchObject({
        tools: [{ ...wrench, dueOn: null, state: 'in use', cycleLimit: null, cyclesUsed: 0 }],
      });
      expect((await browser.ask(postTools, { body: { ...wrench, serial: 'TT-2' } })).status).toBe(403);
    }
  });

  it('have a due date that moves only by a calibration, which the workshop trail holds', async () => {
    const { app, office, params } = await withWrench();
    const moved = await office.ask(patchTool, { method: 'PATCH', params, body: { dueOn: '2040-01-01' } });
    expect(moved).toMatchObject({ status: 400, body: { error: { field: 'dueOn' } } });
    await app.db.updateTable('tool').set({ cycles_used: 812 }).execute();
    expect((await office.ask(postCalibration, { params, body: calibration })).status).toBe(201);
    expect((await office.ask(getTool, { params })).body).toMatchObject({
      dueOn: '2032-05-01',
      cyclesUsed: 0,
      calibrations: [calibration],
    });
    const last = await app.db
      .selectFrom('workshop_entry')
      .select('body')
      .orderBy('seq', 'desc')
      .executeTakeFirstOrThrow();
    expect(JSON.parse(last.body)).toMatchObject({
      kind: 'calibration-recorded',
      data: { tool: params.id, serial: 'TT-1', dueOn: '2032-05-01', cyclesUsedBefore: 812 },
    });
  });

  it('are not set back by an old certificate that is entered late', async () => {
    const { app, office, params } = await withWrench();
    await office.ask(postCalibration, { params, body: calibration });
    await app.db.updateTable('tool').set({ cycles_used: 9 }).execute();
    await office.ask(postCalibration, {
      params,
      body: { ...calibration, on: '2030-05-01', dueOn: '2031-05-01' },
    });
    expect((await office.ask(getTool, { params })).body).toMatchObject({
      dueOn: '2032-05-01',
      cyclesUsed: 9,
    });
  });

  it('have one serial number each', async () => {
    const { office } = await withWrench();
    expect(await office.ask(postTools, { body: wrench })).toMatchObject({
      status: 409,
      body: { error: { field: 'serial' } },
    });
  });

  it('are withdrawn and come back, each time as an entry', async () => {
    const { app, office, params } = await withWrench();
    for (const state of ['withdrawn', 'in use']) {
      expect(await office.ask(patchTool, { method: 'PATCH', params, body: { state } })).toMatchObject({
        body: { state },
      });
    }
    const kinds = await app.db
      .selectFrom('workshop_entry')
      .select('kind')
      .orderBy('seq', 'desc')
      .limit(2)
      .execute();
    expect(kinds.map(({ kind }) => kind)).toEqual(['tool-returned', 'tool-withdrawn']);
  });

  it('refuse figures that are not decimal text', async () => {
    const { office } = await withWrench();
    for (const rangeLow of [4, '4,5', '1e3', '']) {
      expect(await office.ask(postTools, { body: { ...wrench, serial: 'TT-3', rangeLow } })).toMatchObject({
        status: 400,
        body: { error: { code: 'invalid-field', field: 'rangeLow' } },
      });
    }
  });
});
