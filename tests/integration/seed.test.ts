import { describe, expect, it } from 'vitest';
import { demoSignIns, seedDemo } from '@db/seed';
import { ROLES } from '@/domain/role';
import { fitness } from '@/domain/tool';
import { standingOf } from '@/domain/tool-standing';
import { POST as postSignIn } from '@/pages/api/auth/sign-in';
import { checkPin } from '@/server/pins';
import { getActor } from '@/server/session';
import { readTools } from '@/server/tool-rows';
import { openTestApp } from '../support/database';
import { newBrowser } from '../support/requests';

describe('the demo', () => {
  it('fills an empty data folder once', async () => {
    const app = await openTestApp();
    expect(await seedDemo(app)).toBe(true);
    const before = await app.db
      .selectFrom('workshop_entry')
      .select('hash')
      .orderBy('seq', 'desc')
      .executeTakeFirst();
    expect(await seedDemo(app)).toBe(false);
    expect(
      await app.db.selectFrom('workshop_entry').select('hash').orderBy('seq', 'desc').executeTakeFirst(),
    ).toEqual(before);
  }, 30_000);

  it('has somebody for every role, whose sign-in and PIN work', async () => {
    const app = await openTestApp();
    await seedDemo(app);
    expect(new Set(demoSignIns.flatMap(({ roles }) => roles))).toEqual(new Set(ROLES));
    for (const { email, password, pin } of demoSignIns) {
      expect((await newBrowser().ask(postSignIn, { body: { email, password } })).status, email).toBe(200);
      const { id } = await app.db
        .selectFrom('person')
        .select('id')
        .where('email', '=', email)
        .executeTakeFirstOrThrow();
      expect(await checkPin(app, id, pin, { purpose: 'a test' }), email).toEqual({ result: 'right' });
    }
  }, 60_000);

  it('has tools that may be used today, their readings judged; one is past its date and one near it', async () => {
    const app = await openTestApp();
    await seedDemo(app);
    const today = app.clock.now().toISOString().slice(0, 10);
    const owner = await app.db
      .selectFrom('person')
      .select('id')
      .where('email', 'like', 'owner@%')
      .executeTakeFirstOrThrow();
    const tools = await readTools(app.db, await getActor(app.db, owner.id));
    const unfit = tools.filter((tool) => !fitness(tool, { kind: tool.kind, criticalClass: 'A' }, today).fit);
    expect(unfit.map(({ serial }) => serial)).toEqual(['TW330-0108']);
    expect(tools.length).toBeGreaterThan(6);
    const near = tools.filter((tool) => standingOf(tool, today).kind === 'due soon');
    expect(near.map(({ serial }) => serial)).toEqual(['PG10-0350']);
    const calibrations = await app.db
      .selectFrom('calibration')
      .innerJoin('tool', 'tool.id', 'calibration.tool_id')
      .select(['kind', 'verdict'])
      .execute();
    for (const { kind, verdict } of calibrations)
      expect(verdict).toBe(kind === 'torque wrench' ? 'passed' : 'not judged');
  }, 30_000);
});
