import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { cp, mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import SqliteDatabase from 'better-sqlite3';
import type { PushAnswer } from '@db/scripted-tablet';
import { startApp } from '../support/app';
import { each, type Figure, median, ROUNDS, saying, timed } from './report';
import { openJob, openWorkshop, workOn } from './workshop';

const JOBS = 20;
const ENTRIES = 10_000;
const BATCH = 200;
const LIMIT = 2.5;

/** What is pushed, ready to be sent, and the data folder that it is pushed into. */
interface Pushes {
  dataDir: string;
  credential: string;
  /** Each the text of one push without the time of sending. */
  bodies: ((sentAt: string) => string)[];
}

/** How long a server takes for 10,000 entries over HTTP, against a bare one that only proves and keeps them. */
export async function benchSync(): Promise<Figure[]> {
  const folder = await mkdtemp(path.join(tmpdir(), 'witnessmark-bench-'));
  try {
    const pushes = await preparePushes(path.join(folder, 'prepared'));
    const rounds: { bare: number; real: number }[] = [];
    for (let round = 1; round <= ROUNDS; round += 1) {
      saying(`pushing ${ENTRIES} entries, round ${round} of ${ROUNDS}`);
      const bare = await onCopy(pushes, path.join(folder, `bare-${round}`), pushToBare);
      const real = await onCopy(pushes, path.join(folder, `real-${round}`), pushToProgram);
      rounds.push({ bare, real });
    }
    const ratios = rounds.map(({ bare, real }) => real / bare);
    return [
      {
        what: `${ENTRIES} entries over ${JOBS} jobs, pushed in batches of ${BATCH}, against the bare twin`,
        value: median(ratios),
        limit: LIMIT,
        unit: '×',
        detail:
          `program ${each(rounds.map(({ real }) => real))} ms, ` +
          `twin ${each(rounds.map(({ bare }) => bare))} ms, ratios ${each(ratios, 2)}`,
      },
    ];
  } finally {
    await rm(folder, { recursive: true, force: true });
  }
}

/** Opens the jobs, and has the work on them done and signed by its author, before anything is measured. */
async function preparePushes(dataDir: string): Promise<Pushes> {
  saying(`recording ${ENTRIES} entries on a scripted tablet`);
  const app = await startApp();
  try {
    const workshop = await openWorkshop(app.url);
    const { tablet, credential } = workshop;
    const jobs: string[] = [];
    for (let job = 0; job < JOBS; job += 1) jobs.push(await openJob(workshop, 'corvane-v8-rod-bearings'));
    for (const job of jobs) await workOn(workshop, job, { entries: 1 + ENTRIES / JOBS, signs: false });
    const texts = jobs.flatMap((job) => tablet.held(job).outbox).map((pushed) => JSON.stringify(pushed));
    if (texts.length !== ENTRIES) throw new Error(`${texts.length} entries were made.`);
    await app.stop();
    await cp(app.dataDir, dataDir, { recursive: true });
    const bodies = Array.from({ length: ENTRIES / BATCH }, (_, batch) => {
      const entries = texts.slice(batch * BATCH, (batch + 1) * BATCH).join(',');
      return (sentAt: string) =>
        `{"device":"${tablet.device}","sentAt":"${sentAt}","jobs":[],"entries":[${entries}]}`;
    });
    return { dataDir, credential, bodies };
  } finally {
    await app.dispose();
  }
}

/** Measures one server on a copy of the prepared data folder, and counts what it has kept in the end. */
async function onCopy(
  pushes: Pushes,
  dataDir: string,
  measure: (pushes: Pushes) => Promise<number>,
): Promise<number> {
  await cp(pushes.dataDir, dataDir, { recursive: true });
  // The demo's own jobs have entries too.
  const before = countEntries(dataDir);
  const took = await measure({ ...pushes, dataDir });
  const kept = countEntries(dataDir) - before;
  if (kept !== ENTRIES) throw new Error(`${kept} entries were kept.`);
  await rm(dataDir, { recursive: true });
  return took;
}

async function pushToProgram({ dataDir, credential, bodies }: Pushes): Promise<number> {
  const app = await startApp({ DATA_DIR: dataDir });
  try {
    return await timed(async () => {
      for (const body of bodies) await push(`${app.url}/api/sync`, body, `Tablet ${credential}`);
    });
  } finally {
    await app.stop();
    await app.dispose();
  }
}

async function pushToBare({ dataDir, credential, bodies }: Pushes): Promise<number> {
  const { process: twin, url } = await startBare(databaseIn(dataDir));
  try {
    return await timed(async () => {
      for (const body of bodies) await push(url, body, `Tablet ${credential}`);
    });
  } finally {
    const exited = once(twin, 'exit');
    twin.kill();
    await exited;
  }
}

async function startBare(database: string): Promise<{ process: ChildProcess; url: string }> {
  const script = fileURLToPath(new URL('bare-server.mjs', import.meta.url));
  const twin = spawn(process.execPath, [script, database], { stdio: ['ignore', 'pipe', 'inherit'] });
  const [port] = (await once(twin.stdout, 'data')) as [Buffer];
  return { process: twin, url: `http://127.0.0.1:${port.toString().trim()}` };
}

async function push(url: string, body: (sentAt: string) => string, authorization: string): Promise<void> {
  const headers = { 'content-type': 'application/json', authorization };
  const response = await fetch(url, { method: 'POST', headers, body: body(new Date().toISOString()) });
  if (!response.ok) throw new Error(`A push was answered ${response.status}: ${await response.text()}`);
  const { verdicts } = (await response.json()) as PushAnswer;
  const odd = verdicts.find(({ verdict, code }) => verdict !== 'recorded' || code !== undefined);
  if (odd !== undefined) throw new Error(`An entry got another verdict: ${JSON.stringify(odd)}`);
}

function countEntries(dataDir: string): number {
  const database = new SqliteDatabase(databaseIn(dataDir), { readonly: true });
  const count = database.prepare<[], number>('select count(*) from job_entry').pluck().get() ?? 0;
  database.close();
  return count;
}

function databaseIn(dataDir: string): string {
  return path.join(dataDir, 'witnessmark.db');
}
