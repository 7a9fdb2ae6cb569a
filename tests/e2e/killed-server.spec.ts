import path from 'node:path';
import { expect, test } from '@playwright/test';
import { sql } from 'kysely';
import { canonicalJson } from '@/domain/canonical';
import { verifyTrail } from '@/domain/trail';
import { openDatabase } from '@/server/database';
import { openKeys } from '@/server/keys';
import { checkRecord } from '@/server/record-check';
import { nodeChecks } from '@/server/trail-checks';
import { type RunningApp, startApp } from '../support/app';
import { type Bench, type BenchTablet, openBench, openBenchJob } from '../support/kill-bench';
import { Chance } from '../support/simulation/seed';

/*
 * The server is killed as by a power cut while two tablets push to it. What it acknowledged before it died is
 * there after, once and in its order; what it did not acknowledge comes with the next push; and the chains hold.
 * KILLS=100 kills it more often than the tests need, SEED=7 at other moments.
 */

const KILLS = Number(process.env.KILLS ?? 25);
const SEED = Number(process.env.SEED ?? 20_260_602);
/** A job that grew without end would only make each push slower. */
const KILLS_A_JOB = 10;
const LONGEST_LIFE_MS = 320;
/** As long as a start takes, so that some of the kills fall into it. */
const LONGEST_START_MS = 900;

test(`a server that is killed ${KILLS} times has everything that it acknowledged, once and in order`, async () => {
  test.setTimeout(60_000 + KILLS * 6000);
  const app = await startApp({ DEMO: 'off' });
  try {
    const bench = await openBench(app, 2);
    const chance = new Chance(SEED);
    const made = new Map<string, string[]>();
    for (let kill = 0; kill < KILLS; kill += 1) {
      if (kill % KILLS_A_JOB === 0) made.set(await openBenchJob(bench), []);
      const [job, ids] = [...made].at(-1)!;
      await pushUntilKilled(app, bench, { job, ids, chance });
      if (kill % 5 === 4) await killWhileStarting(app, chance);
      await app.restart();
    }
    for (const { tablet } of bench.tablets) await tablet.sync();
    for (const [job, ids] of made) await expectWhole(bench, job, ids);
    await app.stop();
    await expectUnbroken(app);
    tell(bench);
  } finally {
    await app.dispose();
  }
});

interface Work {
  job: string;
  /** Every entry that a tablet made on the job. */
  ids: string[];
  chance: Chance;
}

/** Both tablets record and push without a pause until the server is gone. */
async function pushUntilKilled(app: RunningApp, { tablets, person }: Bench, work: Work): Promise<void> {
  let isKilled = false;
  const after = 10 + work.chance.next() * LONGEST_LIFE_MS;
  const killed = new Promise<void>((resolve, reject) => {
    setTimeout(() => {
      isKilled = true;
      app.kill().then(resolve, reject);
    }, after);
  });
  // Each tablet draws from numbers of its own: whose turn it is differs from run to run.
  const works = tablets.map((one) => [one, new Chance(work.chance.between(0, 1e9))] as const);
  await Promise.all(works.map(([one, chance]) => pushOn(one, person, { ...work, chance }, () => isKilled)));
  await killed;
}

async function pushOn(
  { tablet }: BenchTablet,
  by: Bench['person'],
  { job, ids, chance }: Work,
  isKilled: () => boolean,
): Promise<void> {
  for (;;) {
    const size = chance.between(1, 6);
    for (let n = 0; n < size; n += 1) {
      const data = { class: 'C', words: `remark ${chance.between(0, 999_999)}`, blocks: false } as const;
      const { id } = await tablet.record(job, { kind: 'deviation-raised', data }, { by, afterMs: 10 });
      ids.push(id);
    }
    try {
      await tablet.sync();
    } catch (error) {
      // Only what a dead server does to a connection; a wrong answer is a fault.
      if (!isKilled() || !(error instanceof TypeError)) throw error;
      return;
    }
  }
}

/** Starts the server and kills it, perhaps before it has opened its database, perhaps once it serves. */
async function killWhileStarting(app: RunningApp, chance: Chance): Promise<void> {
  const started = app.restart().then(
    () => 'serves' as const,
    () => 'died' as const,
  );
  await new Promise((resolve) => setTimeout(resolve, chance.next() * LONGEST_START_MS));
  await app.kill();
  await started;
}

async function expectWhole({ client, tablets }: Bench, job: string, made: string[]): Promise<void> {
  const { body } = await client.ask<{
    body: { entries: { recorded: { id: string; seq: number; device: string; deviceSeq: number } }[] };
  }>(`/api/jobs/${job}/trail`);
  const recorded = body.entries.map((entry) => entry.recorded);
  const ids = recorded.map(({ id }) => id);
  expect(ids, 'nothing twice').toHaveLength(new Set(ids).size);
  // Nothing that a tablet made is missing, and nothing is there that none made: the first entry opened the job.
  expect(new Set(ids.slice(1))).toEqual(new Set(made));
  expect(recorded.map(({ seq }) => seq)).toEqual(ids.map((_, index) => index + 1));
  const places = new Map(recorded.map(({ id, seq }) => [id, seq]));
  for (const { tablet, acknowledged } of tablets) {
    const own = recorded.filter(({ device }) => device === tablet.device);
    expect(own.map(({ deviceSeq }) => deviceSeq)).toEqual(own.map((_, index) => index + 1));
    const isOwn = new Set(own.map(({ id }) => id));
    for (const [id, seq] of acknowledged) if (isOwn.has(id)) expect(places.get(id), id).toBe(seq);
    expect(tablet.held(job).outbox, 'nothing left to send').toEqual([]);
    await tablet.sync();
    expect(tablet.held(job).state.count).toBe(recorded.length);
  }
  const acknowledged = new Set(tablets.flatMap((one) => [...one.acknowledged.keys()]));
  expect(
    made.filter((id) => !acknowledged.has(id)),
    'acknowledged in the end',
  ).toEqual([]);
  const exported = await client.ask<unknown>(`/api/jobs/${job}/export`);
  expect(await verifyTrail(canonicalJson(exported), nodeChecks())).toMatchObject({ ok: true });
}

/** The file itself holds together: every chain, every author's signature, every signed head. */
async function expectUnbroken(app: RunningApp): Promise<void> {
  const db = openDatabase(path.join(app.dataDir, 'witnessmark.db'));
  const { workshopKeys } = openKeys(app.dataDir, new Date().toISOString());
  try {
    const { rows } = await sql<{ integrity_check: string }>`pragma integrity_check`.execute(db);
    expect(rows).toEqual([{ integrity_check: 'ok' }]);
    const { breaks, jobs, entries } = await checkRecord(db, workshopKeys);
    expect(breaks).toEqual([]);
    expect(jobs).toBe(Math.ceil(KILLS / KILLS_A_JOB));
    expect(entries).toBeGreaterThan(KILLS);
  } finally {
    await db.destroy();
  }
}

/** How near the kills came to the moment between a commit and its answer. */
function tell({ tablets }: Bench): void {
  const acknowledged = tablets.reduce((sum, one) => sum + one.acknowledged.size, 0);
  const late = tablets.reduce((sum, one) => sum + one.heardLate.size, 0);
  const description = `${KILLS} kills, ${acknowledged} entries, ${late} of them recorded by a push that a kill left unanswered`;
  test.info().annotations.push({ type: 'seen', description });
}
