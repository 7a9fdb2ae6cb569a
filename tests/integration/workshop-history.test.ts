import { describe, expect, it } from 'vitest';
import type { Actor } from '@/server/actor';
import { MINUTE } from '@/server/clock';
import { setAuthorisation } from '@/server/authorisations';
import { changeRoles, setActive } from '@/server/people';
import { recordCalibration } from '@/server/calibrations';
import { addTool, changeTool } from '@/server/tools';
import { getWorkshopView } from '@/server/workshop';
import { readWorkshopHistory } from '@/server/workshop-history';
import { goodReadings } from '../support/calibration';
import { openTestApp, type TestApp } from '../support/database';
import { addTestPeople } from '../support/requests';

const FACTS = {
  name: 'Torque wrench',
  kind: 'torque wrench',
  serial: 'TW-9',
  rangeLow: '2',
  rangeHigh: '50',
  unit: 'N·m',
  dueOn: null,
  cycleLimit: null,
  torqueType: 'II',
  torqueClass: 'A',
} as const;

const READER: Actor = { personId: 'reader', name: 'Reader', roles: ['auditor'], sessionId: undefined };

async function now(app: TestApp) {
  const { seq, people, tools } = await getWorkshopView(app.db, READER, app.keys);
  const byId = (one: { id: string }, other: { id: string }) => one.id.localeCompare(other.id);
  return {
    seq,
    people: people.map(({ hasPin: _hasPin, ...person }) => person).sort(byId),
    tools: tools.sort(byId),
  };
}

describe('the history of the workshop', () => {
  it('gives back what the workshop was after each of its entries', async () => {
    const app = await openTestApp();
    const { owner, tech, sup } = await addTestPeople(app, { tech: ['technician'], sup: ['supervisor'] });
    const seen = [await now(app)];
    const does = async (change: Parameters<ReturnType<typeof app.db.transaction>['execute']>[0]) => {
      app.clock.advance(MINUTE);
      const result = await app.db.transaction().execute(change);
      seen.push(await now(app));
      return result;
    };
    const tool = (await does((trx) => addTool(trx, owner, FACTS, app))) as { id: string };
    const calibrate = (on: string, dueOn: string, readings = goodReadings(FACTS)) =>
      does((trx) => recordCalibration(trx, owner, tool.id, { on, dueOn, certificate: 'C', readings }, app));
    await calibrate('2031-01-10', '2032-01-10');
    await does((trx) => changeRoles(trx, owner, tech.personId, ['technician', 'supervisor'], app));
    await does((trx) => setActive(trx, owner, sup.personId, false, app));
    const certificate = { number: 'T-1', kind: 'master technician' };
    const authorise = (until: string | null) =>
      does((trx) =>
        setAuthorisation(trx, owner, tech.personId, { certificate, authorisedUntil: until }, app),
      );
    await authorise('2031-12-31');
    await authorise(null);
    // An older certificate, written down late, moves no date.
    await calibrate('2030-01-10', '2031-01-09');
    await calibrate('2031-02-10', '2032-02-10', []);
    expect(seen.at(-1)?.tools[0]).toMatchObject({
      dueOn: '2032-01-10',
      failure: expect.stringContaining('no readings at 2 N·m') as string,
    });
    await calibrate('2031-03-10', '2032-03-10');
    await does((trx) => changeTool(trx, owner, tool.id, { rangeHigh: '60', state: 'withdrawn' }, app));
    await does((trx) => setActive(trx, owner, sup.personId, true, app));
    await does((trx) => changeTool(trx, owner, tool.id, { state: 'in use' }, app));

    const history = await readWorkshopHistory(app.db);
    const byId = (one: { id: string }, other: { id: string }) => one.id.localeCompare(other.id);
    for (const moment of seen) {
      const { seq, people, tools } = history.at(moment.seq);
      const sorted = { seq, people: [...people].sort(byId), tools: [...tools].sort(byId) };
      expect(sorted, `after entry ${moment.seq}`).toEqual(moment);
    }
    expect(history.seq).toBe(seen.at(-1)?.seq);
    expect(history.at(history.seq + 50)).toEqual(history.at(history.seq));
  });

  it('knows which entry was the last at a time', async () => {
    const app = await openTestApp();
    const { owner } = await addTestPeople(app, {});
    const before = app.clock.now().toISOString();
    app.clock.advance(MINUTE);
    await app.db.transaction().execute((trx) => addTool(trx, owner, FACTS, app));
    const history = await readWorkshopHistory(app.db);
    expect(history.seqAt('2000-01-01T00:00:00.000Z')).toBe(0);
    expect(history.seqAt(before)).toBe(history.seq - 1);
    expect(history.seqAt('2099-01-01T00:00:00.000Z')).toBe(history.seq);
  });
});
