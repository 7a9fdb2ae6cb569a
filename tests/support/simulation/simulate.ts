/* A run from its seed to its verdict. */
import 'fake-indexeddb/auto';
import { readLostKeys } from '@/offline/lost-keys';
import { chooseHappenings } from './happenings';
import type { Rows } from './disk';
import { checkAll, checkTablet } from './invariants';
import { Run, wordsOf } from './run';
import type { SimTablet, Tab } from './tablet';

const HOUR = 3_600_000;
/** The last events that are shown of a run that broke. */
const SHOWN = 30;

export interface Result {
  seed: number;
  /** What did not hold, in words; undefined if all did. */
  broken?: string | undefined;
  /** Everything that happened, in order. */
  events: string[];
  /** How many records were told to be on a tablet. */
  told: number;
}

/** What is to be read of a run that broke. */
export function wordsOfResult({ seed, broken = 'Everything held.', events }: Result): string {
  const shown = events.slice(-SHOWN).map((event) => `  ${event}`);
  return [
    `Seed ${seed}: ${broken}`,
    `The last ${shown.length} of ${events.length} events:`,
    ...shown,
    `Again: npm run simulate -- --from ${seed} --seeds 1`,
  ].join('\n');
}

/** Runs one seed. */
export async function simulate(seed: number): Promise<Result> {
  const run = await Run.open(seed);
  let broken: string | undefined;
  try {
    await live(run);
    await comeToRest(run);
    await checkAll(run);
    run.complain();
  } catch (error) {
    broken = wordsOf(error);
  } finally {
    await run.close();
  }
  return { seed, broken, events: run.log, told: run.told.size };
}

async function live(run: Run): Promise<void> {
  const { chance, beginning } = run;
  const [one, other] = [chance.pick(beginning.jobs), chance.pick(beginning.jobs)];
  run.jobs = chance.happens(0.2) && one !== other ? [one, other] : [one];
  for (const disk of beginning.disks)
    await run.addTablet(ofJobs(disk, run.jobs), run.jobs, chance.happens(0.6));
  const happen = chooseHappenings(run);
  const events = chance.between(30, 90);
  for (let n = 0; n < events; n += 1) {
    await happen(run);
    await run.turns.take(
      chance.weigh([
        [3, 5],
        [3, 40],
        [2, 200],
      ] as const),
    );
    if (chance.happens(0.04)) await lookAround(run);
    run.complain();
  }
}

/** What of a disk these jobs need. */
function ofJobs(disk: Rows, jobs: readonly string[]): Rows {
  const only = (table: string, by: 'job' | 'id') =>
    (disk.get(table) as { job: string; id: string }[]).filter((row) => jobs.includes(row[by]));
  return new Map(disk).set('entries', only('entries', 'job')).set('jobs', only('jobs', 'id'));
}

/** Lets what is put off on the tablets come to its end, and looks at their records. */
async function lookAround(run: Run): Promise<void> {
  await run.turns.rest();
  for (const { tabs } of run.tablets) {
    const tab = tabs.find(({ offline }) => offline.db.isOpen());
    if (tab) await checkTablet(run, tab);
  }
}

/** The faults end, every tablet is opened once, and all of them sync until nothing moves any more. */
async function comeToRest(run: Run): Promise<void> {
  run.note('from here on nothing goes wrong');
  const { network, turns } = run;
  for (const call of network.echoes) await network.arriveAgain(call);
  for (const call of [...network.there, ...network.back]) network.lose(call);
  for (const tablet of run.tablets) {
    tablet.isAway = false;
    tablet.fill(false);
    await turns.rest();
    for (const tab of [...tablet.tabs]) tab.kill(true);
    tablet.openTab();
  }
  let before = '';
  const quietAt = new Map<SimTablet, string>();
  for (let round = 0; round < 15; round += 1) {
    for (const tablet of run.tablets) {
      // Nothing is left on it, and nothing came to the server since: it would neither send nor get anything.
      if (quietAt.get(tablet) === (await serverStandOf(run))) continue;
      if (await syncQuietly(run, tablet)) quietAt.set(tablet, await serverStandOf(run));
    }
    const now = await standOf(run);
    if (now === before) return;
    before = now;
    // A lock on somebody's PIN ends.
    run.clock.now += 25 * HOUR;
  }
  throw new Error('The tablets never came to rest.');
}

/** Lets a tablet sync; tells whether all went through and nothing is left on it. */
async function syncQuietly(run: Run, tablet: SimTablet): Promise<boolean> {
  const { name } = tablet;
  const [tab] = tablet.tabs;
  if (!tab) throw new Error(`${name} has no page.`);
  const { db, sync } = tab.offline;
  const outcome = await run.finish(sync.now(), { network: true });
  await signInAgain(run, tablet, tab);
  await letInAgain(run, tab);
  if (!outcome.ok) run.note(`${name}: ${outcome.why} (${outcome.code})`);
  return outcome.ok && (await run.finish(db.outbox.count())) === 0;
}

/** Everybody whose key a restored server has forgotten signs in on the tablet once more. */
async function signInAgain(run: Run, tablet: SimTablet, { offline }: Tab): Promise<void> {
  for (const id of await run.finish(readLostKeys(offline.db))) {
    tablet.session = Object.values(run.beginning.people).find((person) => person.id === id);
    run.note(`${tablet.name}: ${tablet.session?.name ?? id} signs in again`);
    await run.finish(offline.sync.now(), { network: true });
  }
}

/** The owner lets everybody in again whose judgement waits, since a restore forgot that they were. */
async function letInAgain(run: Run, { offline }: Tab): Promise<void> {
  const { turns, server, beginning } = run;
  const waiting = await run.finish(
    offline.db.outbox.filter(({ code }) => code === 'workshop-lost').toArray(),
  );
  for (const by of new Set(waiting.map(({ entry }) => entry.by))) {
    await turns.outside(() => server.setActive(beginning.people.owner, by, true));
    run.note(`${by} is let in again, whose judgement waits`);
    await run.finish(offline.sync.now(), { network: true });
  }
}

/** How much the server holds of everything that a tablet may get. */
function serverStandOf({ turns, server }: Run): Promise<string> {
  const count = (table: 'job_entry' | 'workshop_entry' | 'refused_entry') =>
    server.app.db
      .selectFrom(table)
      .select(({ fn }) => fn.countAll().as('rows'))
      .executeTakeFirstOrThrow();
  return turns.outside(async () =>
    JSON.stringify([await count('job_entry'), await count('workshop_entry'), await count('refused_entry')]),
  );
}

/** Where everything stands, to see whether it still moves. */
async function standOf(run: Run): Promise<string> {
  const parts: unknown[] = [];
  for (const { tabs } of run.tablets) {
    const db = tabs[0]!.offline.db;
    const rows = await run.finish(db.outbox.toArray());
    const jobs = await run.finish(db.jobs.toArray());
    parts.push(
      rows.map(({ id, where }) => [id, where]),
      jobs.map(({ have }) => have),
    );
  }
  return JSON.stringify(parts);
}
