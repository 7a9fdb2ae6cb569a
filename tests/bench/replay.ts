import { bytesOf, canonicalJson, canonicalWithout, hashJson } from '@/domain/canonical';
import type { Recorded } from '@/domain/entry';
import { replay } from '@/domain/job';
import type { JobState } from '@/domain/job-state';
import type { Plan } from '@/domain/plan';
import { verifyTrail } from '@/domain/trail';
import { SERVER_FIELDS } from '@/domain/trail-hash';
import { sha256Hex } from '@/server/crypto';
import { nodeChecks } from '@/server/trail-checks';
import { startApp } from '../support/app';
import { each, type Figure, median, ROUNDS, saying, timed } from './report';
import { openJob, openWorkshop, workOn } from './workshop';

const LIMIT = 2;
const ENTRIES = 500;
/** Rounds are short, so each repeats its work; the first round warms up and does not count. */
const REPEATS = 10;
const ADDED: ReadonlySet<string> = new Set(SERVER_FIELDS);

interface Exported {
  plans: Plan[];
  entries: { recorded: Recorded }[];
}

/** How long a job's trail takes to be verified and replayed, against the same parse, forms, hashes and fold. */
export async function benchReplay(): Promise<Figure[]> {
  const bytes = new TextEncoder().encode(await makeTrail());
  saying('verifying and replaying it');
  const rounds: { bare: number; real: number }[] = [];
  for (let round = 0; round <= ROUNDS; round += 1) {
    const bare = await timed(() => repeat(() => replayBare(bytes)));
    const real = await timed(() => repeat(() => replayVerified(bytes)));
    if (round > 0) rounds.push({ bare: bare / REPEATS, real: real / REPEATS });
  }
  const ratios = rounds.map(({ bare, real }) => real / bare);
  return [
    {
      what: `Replay of a job of ${ENTRIES} entries with verification, against the bare fold`,
      value: median(ratios),
      limit: LIMIT,
      unit: '×',
      detail:
        `verified ${each(rounds.map(({ real }) => real))} ms, ` +
        `bare ${each(rounds.map(({ bare }) => bare))} ms, ratios ${each(ratios, 2)}; every signature checked`,
    },
  ];
}

async function makeTrail(): Promise<string> {
  saying(`recording a job of ${ENTRIES} entries, and reading its trail`);
  const app = await startApp();
  try {
    const workshop = await openWorkshop(app.url);
    const job = await openJob(workshop, 'corvane-v8-rod-bearings');
    await workOn(workshop, job, { entries: ENTRIES, signs: true, next: ({ kind }) => kind === 'hand-over' });
    await workshop.tablet.sync();
    const headers = { cookie: workshop.supervisor.cookie };
    const response = await fetch(`${app.url}/api/jobs/${job}/trail`, { headers });
    if (!response.ok) throw new Error(`The trail was answered ${response.status}.`);
    return await response.text();
  } finally {
    await app.dispose();
  }
}

async function repeat(work: () => Promise<JobState>): Promise<void> {
  for (let time = 0; time < REPEATS; time += 1) {
    const { count } = await work();
    if (count < ENTRIES) throw new Error(`Only ${count} entries were replayed.`);
  }
}

/** What a reader does who believes nothing: the whole of the verification, and then the fold. */
async function replayVerified(bytes: Uint8Array<ArrayBuffer>): Promise<JobState> {
  const verdict = await verifyTrail(bytes, nodeChecks());
  if (!verdict.ok) throw new Error(`The trail does not verify: ${verdict.why}`);
  return fold(verdict.body as unknown as Exported);
}

/** The same parse, the same canonical forms and hashes of the file and of its entries, and the fold alone. */
async function replayBare(bytes: Uint8Array<ArrayBuffer>): Promise<JobState> {
  const text = new TextDecoder().decode(bytes);
  const exported = JSON.parse(text) as { body: Exported };
  if (canonicalJson(exported) !== text) throw new Error('The trail is not in its one form.');
  sha256Hex(bytes);
  for (const { recorded } of exported.body.entries) {
    for (const form of canonicalWithout(recorded, ADDED)) sha256Hex(bytesOf(form));
  }
  return fold(exported.body);
}

function fold({ plans, entries }: Exported): JobState {
  const byHash = new Map(plans.map((plan) => [hashJson(plan, sha256Hex), plan]));
  return replay(
    byHash,
    entries.map(({ recorded }) => recorded),
  );
}
