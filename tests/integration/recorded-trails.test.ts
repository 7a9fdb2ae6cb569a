import { existsSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import { seedDemo } from '@db/seed';
import type { Recorded } from '@/domain/entry';
import { replay } from '@/domain/job';
import type { Plan } from '@/domain/plan';
import { verifyTrail } from '@/domain/trail';
import { canonicalJson, sha256Hex } from '@/server/crypto';
import { exportTrail } from '@/server/job-export';
import { findActor } from '@/server/session';
import { nodeChecks } from '@/server/trail-checks';
import { openTestApp } from '../support/database';

/* What earlier versions recorded reads the same for ever. See tests/trails/README.md for how a release adds its own. */

const FOLDER = path.join(process.cwd(), 'tests', 'trails');
const ENDING = '.trail.json';
const recording = process.env.RECORD_TRAILS;

/** Verifies a trail and folds it; the state without its plan, which the trail holds anyway. */
async function stateOf(text: string): Promise<string> {
  const verdict = await verifyTrail(text, nodeChecks());
  if (!verdict.ok) throw new Error(`It does not verify: ${verdict.why}`);
  const plans = new Map(
    (verdict.body.plans as unknown as Plan[]).map((plan) => [sha256Hex(canonicalJson(plan)), plan]),
  );
  const entries = verdict.body.entries.map(({ recorded }) => recorded as unknown as Recorded);
  const state = { ...replay(plans, entries), plan: undefined };
  // As JSON has it: a field that is absent and one that is undefined are the same.
  return canonicalJson(JSON.parse(JSON.stringify(state)));
}

describe.runIf(recording !== undefined)('the trails of this release', () => {
  it('are recorded', { timeout: 120_000 }, async () => {
    const app = await openTestApp();
    await seedDemo(app);
    const supervisor = await app.db
      .selectFrom('person')
      .select('id')
      .where('roles', 'like', '%supervisor%')
      .executeTakeFirstOrThrow();
    const actor = (await findActor(app.db, supervisor.id, undefined))!;
    const jobs = await app.db.selectFrom('job').select(['id', 'number']).orderBy('number').execute();
    for (const { id, number } of jobs) {
      const name = path.join(FOLDER, `${recording}-${number}`);
      expect(existsSync(`${name}${ENDING}`), 'a recorded trail is never changed').toBe(false);
      const { text } = await exportTrail(app, actor, id);
      writeFileSync(`${name}${ENDING}`, text);
      writeFileSync(`${name}.state.json`, await stateOf(text));
    }
  });
});

describe('a trail that an earlier version recorded', () => {
  const names = readdirSync(FOLDER).filter((name) => name.endsWith(ENDING));

  it('is there', () => {
    expect(names.length).toBeGreaterThan(0);
  });

  it.each(names)('%s verifies, and folds to the same state', async (name) => {
    const text = readFileSync(path.join(FOLDER, name), 'utf8');
    const state = readFileSync(path.join(FOLDER, name.replace(ENDING, '.state.json')), 'utf8');
    expect(JSON.parse(await stateOf(text))).toEqual(JSON.parse(state));
  });
});
