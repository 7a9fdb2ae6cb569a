/* What must hold: of a tablet at any moment of rest, and of everything once it is quiet. */
import { isDeepStrictEqual } from 'node:util';
import { judgementKinds, type Entry } from '@/domain/entry';
import { replay } from '@/domain/job';
import type { JobState } from '@/domain/job-state';
import { NO_PREVIOUS } from '@/domain/trail-hash';
import { ofJob, type FloorDatabase } from '@/offline/database';
import { getFold, listRecorded } from '@/server/job-fold';
import { checkRecord } from '@/server/record-check';
import { Breach, type Run, type Told } from './run';
import type { SimTablet, Tab } from './tablet';

/** A tablet's own records at rest: each in one place, and no gap in what it has of a trail. */
export async function checkTablet(run: Run, { tablet, offline }: Tab): Promise<void> {
  checkRows(run, tablet, await run.finish(readAll(offline.db)));
}

/** The same of a tablet whose pages were killed: whatever they were in the middle of. */
export async function checkDisk(run: Run, tablet: SimTablet): Promise<void> {
  checkRows(run, tablet, await run.onDisk(tablet, readAll));
}

type AllRows = Awaited<ReturnType<typeof readAll>>;

function checkRows(run: Run, tablet: SimTablet, rows: AllRows): void {
  const { entries, outbox, refused, jobs, counters } = rows;
  const places = new Map<string, string[]>();
  const note = (id: string, place: string) => places.set(id, [...(places.get(id) ?? []), place]);
  for (const { id } of entries) note(id, 'entries');
  for (const { id } of outbox) note(id, 'outbox');
  for (const { id } of refused) note(id, 'refused');
  for (const [id, found] of places)
    if (found.length > 1) throw new Breach(`On ${tablet.name} ${id} is in ${found.join(' and ')}.`);
  for (const [id, { tablets, entry }] of run.told)
    if (tablets.has(tablet) && !places.has(id))
      throw new Breach(`${entry.kind} ${id} was told to be on ${tablet.name}, and is not there any more.`);
  for (const { id, have } of jobs) {
    let last = { seq: 0, hash: NO_PREVIOUS };
    for (const row of entries.filter(({ job }) => job === id)) {
      if (row.seq !== last.seq + 1 || row.recorded.prev !== last.hash)
        throw new Breach(`On ${tablet.name} entry ${row.seq} does not follow entry ${last.seq}.`);
      last = row;
    }
    if ((have?.seq ?? 0) !== last.seq || (have?.hash ?? NO_PREVIOUS) !== last.hash)
      throw new Breach(`${tablet.name} says it has entry ${have?.seq ?? 0}, and has ${last.seq}.`);
    const given = counters.find(({ job }) => job === id)?.deviceSeq ?? 0;
    const made = outbox.filter(({ job }) => job === id).map(({ entry }) => entry);
    const highest = Math.max(
      0,
      ...made.filter(({ device }) => device === tablet.device).map((e) => e.deviceSeq),
    );
    if (highest > given) throw new Breach(`${tablet.name} would give number ${highest} out again.`);
  }
}

function readAll(db: FloorDatabase) {
  const { entries, outbox, refused, jobs, counters } = db;
  return db.transaction('r', [entries, outbox, refused, jobs, counters], async () => ({
    entries: await entries.toArray(),
    outbox: await outbox.toArray(),
    refused: await refused.toArray(),
    jobs: await jobs.toArray(),
    counters: await counters.toArray(),
  }));
}

/** Everything that must hold once all is quiet. */
export async function checkAll(run: Run): Promise<void> {
  for (const tablet of run.tablets) await checkTablet(run, tabOf(tablet));
  await checkChains(run);
  const waiting = await checkOutboxes(run);
  await checkTold(run, waiting);
  for (const job of run.jobs) {
    await checkNumbers(run, job);
    await checkStates(run, job);
  }
  await checkPhotographs(run);
}

function tabOf({ tabs, name }: SimTablet): Tab {
  const [tab] = tabs;
  if (!tab) throw new Error(`${name} has no page.`);
  return tab;
}

async function checkChains({ turns, server }: Run): Promise<void> {
  const { app } = server;
  const { breaks } = await turns.outside(() => checkRecord(app.db, app.keys.workshopKeys));
  const [first] = breaks;
  if (first) throw new Breach(`The record is broken: ${JSON.stringify(first)}`);
}

/** What may still wait, and for what. */
async function checkOutboxes(run: Run): Promise<Set<string>> {
  const waiting = new Set<string>();
  for (const tablet of run.tablets) {
    const outbox = await run.finish(tabOf(tablet).offline.db.outbox.toArray());
    for (const { id, where, code = '', reason, entry } of outbox) {
      waiting.add(id);
      const what = `${entry.kind} ${id} (number ${entry.deviceSeq}) on ${tablet.name}`;
      if (where !== 'waiting' || !reason) throw new Breach(`${what} is "${where}" and nothing is to come.`);
      const mayWait =
        run.lost.length > 0 ? ['earlier-missing', 'evidence-missing', 'photograph-missing'] : [];
      // Nobody can enrol a key again on a tablet that is gone.
      const isOfLost = code === 'key-lost' && run.lost.some(({ device }) => device === entry.device);
      if (!mayWait.includes(code) && !isOfLost)
        throw new Breach(`${what} waits for ever: ${reason} (${code})`);
    }
  }
  return waiting;
}

/** Each record that a screen told of is in the trail or among the refused, once. */
async function checkTold(run: Run, waiting: ReadonlySet<string>): Promise<void> {
  const { db } = run.server.app;
  const recorded = await run.turns.outside(() =>
    db.selectFrom('job_entry').select(['id', 'content_hash']).execute(),
  );
  const refused = await run.turns.outside(() =>
    db.selectFrom('refused_entry').select(['entry_id as id', 'content_hash']).execute(),
  );
  const count = (rows: typeof refused, id: string, { contentHash }: Told) =>
    rows.filter((row) => row.id === id && row.content_hash === contentHash).length;
  for (const [id, told] of run.told) {
    const [inTrail, inRefused] = [count(recorded, id, told), count(refused, id, told)];
    const isExcused = waiting.has(id) || [...told.tablets].every((tablet) => run.lost.includes(tablet));
    const times = inTrail + inRefused;
    if (times > 1 || (times === 0 && !isExcused)) {
      const { kind, deviceSeq } = told.entry;
      throw new Breach(
        `${kind} ${id} (number ${deviceSeq}) is ${inTrail} times in the trail and ${inRefused} times refused.`,
      );
    }
  }
  await checkActs(run);
  for (const [id, { isRecorded, restores }] of run.verdicts) {
    const isThere = (isRecorded ? recorded : refused).some((row) => row.id === id);
    if (isThere || (restores < run.restores && run.lost.length > 0)) continue;
    throw new Breach(`${id} was acknowledged as ${isRecorded ? 'recorded' : 'refused'} and is not there.`);
  }
}

/**
 * What was in order on its tablet happened: it is in the trail, whatever others did meanwhile. Of a copied tablet
 * nobody can say what it saw, since two of them count.
 */
async function checkActs(run: Run): Promise<void> {
  if (run.hasCopy) return;
  const { db } = run.server.app;
  const refused = await run.turns.outside(() =>
    db.selectFrom('refused_entry').select(['entry_id', 'code', 'message']).execute(),
  );
  for (const { entry_id, code, message } of refused) {
    const told = run.told.get(entry_id ?? '');
    if (!told || isJudged(told.entry)) continue;
    if (code === 'key-unknown' && run.lost.some(({ device }) => device === told.entry.device)) continue;
    throw new Breach(
      `${told.entry.kind} ${entry_id} was in order on its tablet and is refused: ${message} (${code})`,
    );
  }
}

function isJudged({ kind }: Entry): boolean {
  return kind === 'took-over' || judgementKinds.some((judgement) => judgement === kind);
}

/** Each tablet's numbers of a job come without a gap, and twice only from a copied tablet. */
async function checkNumbers(run: Run, job: string): Promise<void> {
  const { db } = run.server.app;
  const rows = await run.turns.outside(async () => [
    ...(await db
      .selectFrom('job_entry')
      .select(['device_id', 'device_seq'])
      .where('job_id', '=', job)
      .execute()),
    ...(await db
      .selectFrom('refused_entry')
      .select(['device_id', 'device_seq'])
      .where('job_id', '=', job)
      .execute()),
  ]);
  const numbers = new Map<string, number[]>();
  for (const { device_id, device_seq } of rows) {
    if (device_id === null || device_seq === null) continue;
    numbers.set(device_id, [...(numbers.get(device_id) ?? []), device_seq]);
  }
  for (const [device, given] of numbers) {
    const once = new Set(given);
    const name = run.tabletOf(device)?.name ?? device;
    if (once.size < given.length && !run.isCopied(device)) throw new Breach(`${name} used a number twice.`);
    for (let number = 1; number <= once.size; number += 1)
      if (!once.has(number) && run.lost.length === 0)
        throw new Breach(`Number ${number} of ${name} is missing in the trail.`);
  }
}

/** Every tablet and the server make the same of the trail. */
async function checkStates(run: Run, job: string): Promise<void> {
  const { app } = run.server;
  const [{ plans, state }, rows] = await run.turns.outside(async () => [
    await getFold(app.db, job),
    await listRecorded(app.db, job),
  ]);
  const folded = replay(
    plans,
    rows.map(({ recorded }) => recorded),
  );
  const right = plain(folded);
  if (!isDeepStrictEqual(right, plain(state)))
    throw new Breach('The server holds another state than the trail gives.');
  for (const tablet of run.tablets) {
    const { offline } = tabOf(tablet);
    const kept = await run.finish(ofJob(offline.db.entries, job).toArray());
    const isWhole = isDeepStrictEqual(
      kept.map(({ hash }) => hash),
      rows.map(({ hash }) => hash),
    );
    if (!isWhole)
      throw new Breach(`${tablet.name} has ${kept.length} entries of the trail's ${rows.length}.`);
    const view = await run.finish(offline.jobs.open(job));
    if (view.stopped) throw new Breach(`${tablet.name} stopped the job: ${view.stopped.words}`);
    if (!isDeepStrictEqual(plain(view.confirmed), right))
      throw new Breach(`${tablet.name} sees another state than the server.`);
    const isShownSame = view.state === view.confirmed || isDeepStrictEqual(plain(view.state), right);
    if (view.pending.length === 0 && !isShownSame)
      throw new Breach(`${tablet.name} shows another state than the server.`);
  }
}

function plain(state: JobState): unknown {
  return JSON.parse(JSON.stringify({ ...state, plan: undefined }));
}

/** The bytes of every photograph that a surviving tablet told of are at the server. */
async function checkPhotographs(run: Run): Promise<void> {
  const { db } = run.server.app;
  const rows = await run.turns.outside(() => db.selectFrom('photo').select('hash').execute());
  const there = new Set(rows.map(({ hash }) => hash));
  for (const { entry, tablets } of run.told.values()) {
    if (entry.kind !== 'photographed' || there.has(entry.data.photo)) continue;
    if ([...tablets].every((tablet) => run.lost.includes(tablet))) continue;
    throw new Breach(`The photograph of ${entry.id} never came to the server.`);
  }
}
