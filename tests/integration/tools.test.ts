import { describe, expect, it } from 'vitest';
import { fitness } from '@/domain/tool';
import { POST as postCalibration } from '@/pages/api/tools/[id]/calibrations';
import { GET as getTool, PATCH as patchTool } from '@/pages/api/tools/[id]/index';
import { GET as getTools, POST as postTools } from '@/pages/api/tools/index';
import { goodReadings } from '../support/calibration';
import { openTestApp, type TestApp } from '../support/database';
import { addTestPeople, signIn } from '../support/requests';
import { workshopOf } from '../support/tablet';

const staff = {
  ines: ['technician'],
  sup: ['supervisor'],
  lead: ['quality lead'],
  auditor: ['auditor'],
} as const;
const wrench = {
  name: 'Torque wrench',
  kind: 'torque wrench',
  serial: 'TT-1',
  rangeLow: '4',
  rangeHigh: '25',
  unit: 'N·m',
  torqueType: 'II',
  torqueClass: 'A',
} as const;
const calibration = {
  on: '2031-05-01',
  dueOn: '2032-05-01',
  certificate: 'C-77',
  readings: goodReadings(wrench),
};
/** The last of them is off by 13.6 %. */
const badReadings = [...calibration.readings.slice(0, -1), { set: '25', reference: '22', unit: 'N·m' }];
const WHY = 'at 25 N·m 1 of 5 is off by more than ± 4 %, the worst by 13.636 %';

async function withWrench() {
  const app = await openTestApp();
  const people = await addTestPeople(app, staff);
  const office = await signIn(people.sup);
  const { body } = await office.ask(postTools, { body: wrench });
  return { app, office, params: { id: (body as { id: string }).id }, ...people };
}

describe('tools', () => {
  it('are added by a supervisor and read by everybody', { timeout: 15_000 }, async () => {
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
      calibrations: [{ ...calibration, verdict: 'passed', reasons: [] }],
    });
    const last = await app.db
      .selectFrom('workshop_entry')
      .select('body')
      .orderBy('seq', 'desc')
      .executeTakeFirstOrThrow();
    expect(JSON.parse(last.body)).toMatchObject({
      kind: 'calibration-recorded',
      data: {
        tool: params.id,
        serial: 'TT-1',
        dueOn: '2032-05-01',
        cyclesUsedBefore: 812,
        verdict: 'passed',
      },
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

describe('a calibration', () => {
  it('that failed moves no date, makes the tool unfit for class A, and is an entry that says why', async () => {
    const { app, office, params } = await withWrench();
    await office.ask(postCalibration, {
      params,
      body: { ...calibration, on: '2031-04-01', dueOn: '2031-12-01' },
    });
    const failed = await office.ask(postCalibration, {
      params,
      body: { ...calibration, readings: badReadings },
    });
    expect(failed).toMatchObject({ status: 201, body: { verdict: 'failed', reasons: [WHY] } });
    expect((await office.ask(getTool, { params })).body).toMatchObject({ dueOn: '2031-12-01', failure: WHY });
    expect(await dataOfLast(app)).toMatchObject({ verdict: 'failed', reasons: [WHY] });
    const { tools } = await workshopOf(app);
    const use = { kind: 'torque wrench', criticalClass: 'A' } as const;
    expect(fitness(tools[0], use, '2031-05-06')).toEqual({
      fit: false,
      reasons: [`its last calibration failed: ${WHY}`],
    });
  });

  it('that passes makes the tool fit again; an older one that is entered late does not', async () => {
    const { office, params } = await withWrench();
    const failureAfter = async (body: object) => {
      expect((await office.ask(postCalibration, { params, body: { ...calibration, ...body } })).status).toBe(
        201,
      );
      return ((await office.ask(getTool, { params })).body as { failure: string | null }).failure;
    };
    expect(await failureAfter({ on: '2031-05-02', readings: badReadings })).toBe(WHY);
    expect(await failureAfter({ on: '2031-05-01' })).toBe(WHY);
    expect(await failureAfter({ on: '2031-05-03' })).toBeNull();
  });

  it.each(['verdict', 'reasons', 'isPassed'])('takes no %s from whoever enters it', async (field) => {
    const { app, office, params } = await withWrench();
    const body = { ...calibration, readings: badReadings, [field]: 'passed' };
    const refused = await office.ask(postCalibration, { params, body });
    expect(refused).toMatchObject({ status: 400, body: { error: { code: 'invalid-field' } } });
    expect(await app.db.selectFrom('calibration').select('id').execute()).toEqual([]);
  });

  it('is entered by a supervisor, a quality lead or an owner, and by nobody else', async () => {
    const { params, ines, auditor, lead, owner } = await withWrench();
    for (const [person, status] of [
      [ines, 403],
      [auditor, 403],
      [lead, 201],
      [owner, 201],
    ] as const) {
      const browser = await signIn(person);
      expect((await browser.ask(postCalibration, { params, body: calibration })).status).toBe(status);
    }
  });

  it('of a torque wrench waits for its type and class, and takes no nonsense for a reading', async () => {
    const { office } = await withWrench();
    const unknown = { ...wrench, serial: 'TT-2', torqueType: null, torqueClass: null };
    const { body } = await office.ask(postTools, { body: unknown });
    const params = { id: (body as { id: string }).id };
    expect(await office.ask(postCalibration, { params, body: calibration })).toMatchObject({
      status: 409,
      body: { error: { message: expect.stringContaining('its type and class must be known') as string } },
    });
    await office.ask(patchTool, { method: 'PATCH', params, body: { torqueType: 'II', torqueClass: 'A' } });
    for (const reference of ['0', '-4', '007']) {
      const readings = [{ set: '4', reference, unit: 'N·m' }];
      expect(await office.ask(postCalibration, { params, body: { ...calibration, readings } })).toMatchObject(
        {
          status: 400,
          body: { error: { field: 'readings' } },
        },
      );
    }
    expect((await office.ask(postCalibration, { params, body: calibration })).status).toBe(201);
  });

  it('of another kind of tool is kept and not judged', async () => {
    const { office } = await withWrench();
    const gauge = { name: 'Angle gauge', kind: 'angle gauge', serial: 'AG-1', unit: 'deg' };
    const { body } = await office.ask(postTools, { body: gauge });
    const params = { id: (body as { id: string }).id };
    const readings = [{ set: '0', reference: '0', unit: 'deg' }];
    expect(
      (await office.ask(postCalibration, { params, body: { ...calibration, readings } })).body,
    ).toMatchObject({
      verdict: 'not judged',
      reasons: [],
    });
    expect((await office.ask(getTool, { params })).body).toMatchObject({
      dueOn: '2032-05-01',
      failure: null,
    });
  });

  it('is not entered before it was made', async () => {
    const { office, params } = await withWrench();
    const body = { ...calibration, on: '2031-05-07', dueOn: '2032-05-07' };
    expect(await office.ask(postCalibration, { params, body })).toMatchObject({
      status: 400,
      body: { error: { field: 'on' } },
    });
  });
});

describe('the facts that a calibration was judged by', () => {
  it('make the tool unfit where its calibration would fail by them, and say so in the trail', async () => {
    const { app, office, params } = await withWrench();
    await office.ask(postCalibration, { params, body: calibration });
    const changed = await office.ask(patchTool, { method: 'PATCH', params, body: { rangeHigh: '200' } });
    const why = expect.stringContaining('by its changed facts there are no readings at') as string;
    expect(changed.body).toMatchObject({ failure: why });
    expect(await dataOfLast(app)).toMatchObject({ to: { failure: why } });
    const { body } = await office.ask(patchTool, { method: 'PATCH', params, body: { rangeHigh: '25' } });
    expect(body).toMatchObject({ failure: why });
  });

  it('never make a tool with a date into one of another rule', async () => {
    const { office, params } = await withWrench();
    await office.ask(postCalibration, { params, body: calibration });
    const body = { kind: 'micrometer', torqueType: null, torqueClass: null };
    expect(await office.ask(patchTool, { method: 'PATCH', params, body })).toMatchObject({
      status: 409,
      body: { error: { field: 'kind' } },
    });
  });

  it('go together, and are of torque tools', async () => {
    const { office } = await withWrench();
    for (const [facts, field] of [
      [{ torqueType: 'I', torqueClass: 'F' }, 'torqueClass'],
      [{ torqueType: 'II', torqueClass: null }, 'torqueClass'],
      [{ kind: 'micrometer' }, 'torqueType'],
      [{ dueOn: '2031-12-01' }, 'dueOn'],
    ] as const) {
      const body = { ...wrench, serial: 'TT-3', ...facts };
      expect(await office.ask(postTools, { body })).toMatchObject({
        status: 400,
        body: { error: { field } },
      });
    }
  });
});

describe('the list of tools', () => {
  it('can be of those whose date is near, or of those that class A may not use', async () => {
    const { office, params } = await withWrench();
    const add = async (serial: string, on: string, dueOn: string) => {
      const { body } = await office.ask(postTools, { body: { ...wrench, serial } });
      await office.ask(postCalibration, {
        params: { id: (body as { id: string }).id },
        body: { ...calibration, on, dueOn },
      });
    };
    // The clock of the tests stands at 6 May 2031.
    await add('near', '2030-06-05', '2031-06-05');
    await add('far', '2030-06-06', '2031-06-06');
    await add('past', '2030-05-05', '2031-05-05');
    await add('today', '2030-05-06', '2031-05-06');
    const serials = async (show?: string) => {
      const { body } = await office.ask(getTools, show === undefined ? {} : { query: { show } });
      return (body as { tools: { serial: string }[] }).tools.map(({ serial }) => serial);
    };
    expect(await serials('due')).toEqual(['near', 'today']);
    expect(await serials('past')).toEqual(['TT-1', 'past']);
    await office.ask(postCalibration, { params, body: { ...calibration, readings: badReadings } });
    expect(await serials('past')).toEqual(['TT-1', 'past']);
    await office.ask(patchTool, { method: 'PATCH', params, body: { state: 'withdrawn' } });
    expect(await serials('past')).toEqual(['past']);
    expect(await serials()).toHaveLength(5);
  });
});

async function dataOfLast(app: TestApp): Promise<unknown> {
  const last = await app.db
    .selectFrom('workshop_entry')
    .select('body')
    .orderBy('seq', 'desc')
    .executeTakeFirstOrThrow();
  return (JSON.parse(last.body) as { data: unknown }).data;
}
