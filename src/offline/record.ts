/*
 * Making entries. An entry is signed before it is written, and a signature can't be awaited inside an
 * IndexedDB transaction; so the number is guessed, the entry signed, and the transaction writes only if the
 * job is still as it was when the rules were asked. Otherwise all of it begins again from the new state.
 */
import { parseEntry, type Entry, type EntryData, type EntryKind } from '@/domain/entry';
import { photosOf } from '@/domain/job-photos';
import { applyEntry, mayRecord } from '@/domain/job';
import type { JobState } from '@/domain/job-state';
import { signContent } from './author-key';
import type { AuthorKeyRow, FloorDatabase, OutboxRow, SealedPin, WorkshopRow } from './database';
import { readDevice } from './device';
import { contentHashOf } from './hashing';
import type { JobView } from './job-store';
import type { Offline } from './offline';
import type { PreparedPhoto } from './photo';
import { sealPin } from './seal';
import { instantOf, type Surroundings } from './surroundings';
import { canMakeEntries, canSignWithPin } from './tablet';
import { cleanText } from './text';

/** What a person did, before it has a number and a signature. */
export type Draft = {
  [K in EntryKind]: {
    kind: K;
    step?: string | undefined;
    data: EntryData<K>;
    /** Ids of the others who had a hand in it. */
    with?: string[] | undefined;
    afterwards?: { when: string; reason: string } | undefined;
    /** Sealed at once and kept nowhere. */
    pin?: string | undefined;
  };
}[EntryKind];

interface RecordOptions {
  /** The author. */
  by: string;
  /** Pictures that the drafts name; kept with them or not at all. */
  photos?: PreparedPhoto[] | undefined;
  /** Milliseconds; the tablet's clock if absent. */
  now?: number | undefined;
}

/** Nothing was recorded, and this is why. */
export interface Refusal {
  ok: false;
  code: string;
  why: string;
  unlock?: string | undefined;
  /** Which of the drafts it was. */
  index: number;
}

export type RecordOutcome = { ok: true; entries: Entry[] } | Refusal;

interface Signed {
  entry: Entry;
  contentHash: string;
  signature: string;
  sealed?: SealedPin | undefined;
}

/**
 * Records what a person did: all of the drafts or none, durable on this tablet before it resolves, and the
 * job's view already shows it. A refusal says in words why, and then nothing was recorded.
 */
export async function recordEntries(
  offline: Offline,
  job: string,
  drafts: readonly Draft[],
  { by, photos = [], now = offline.now() }: RecordOptions,
): Promise<RecordOutcome> {
  // Asked for together: a finger is waiting.
  const [author, plan, found] = await Promise.all([
    refuseAuthor(offline, drafts, by, now),
    refuseUnknownPlan(offline, drafts),
    readGround(offline, by),
  ]);
  const refusal = author ?? plan;
  if (refusal) return refusal;
  let view = offline.jobs.get(job) ?? (await offline.jobs.open(job));
  for (let ground = found; ; ground = await readGround(offline, by)) {
    if (!ground) return noWorkshop();
    const drawn = drawUp(offline, view, drafts, { by, now, photos, ...ground });
    if (!drawn.ok) {
      // Another tab or a pull may have changed the job since: only what is on the disk now refuses.
      const fresh = await offline.jobs.refresh(job);
      if (fresh === view) return drawn;
      view = fresh;
      continue;
    }
    const signed = await signAll(offline, drawn.entries, drafts, ground);
    const rows = await writeAll(offline, view, signed, ground, { photos, keptAt: instantOf(now) });
    if (rows) {
      await offline.jobs.extend(view, rows, view.deviceSeq + rows.length);
      offline.sync.nudge();
      return { ok: true, entries: drawn.entries };
    }
    view = await offline.jobs.refresh(job);
  }
}

interface Ground {
  device: string;
  workshop: WorkshopRow;
  key: AuthorKeyRow;
}

/** Signing with a PIN needs the signer's key but no session of theirs on this tablet. */
async function refuseAuthor(
  s: Surroundings,
  drafts: readonly Draft[],
  by: string,
  now: number,
): Promise<Refusal | undefined> {
  const byPin = drafts.every(
    ({ kind, pin }) => pin !== undefined && (kind === 'signed' || kind === 'countersigned'),
  );
  const verdict = byPin && drafts.length > 0 ? await canSignWithPin(s, by) : await canMakeEntries(s, by, now);
  return verdict.ok ? undefined : { ...verdict, index: 0 };
}

/** After a move to a plan that isn't here the job could not be shown any more. */
async function refuseUnknownPlan(s: Surroundings, drafts: readonly Draft[]): Promise<Refusal | undefined> {
  for (const [index, draft] of drafts.entries()) {
    if (draft.kind !== 'plan-moved' || (await s.db.plans.get(draft.data.to))) continue;
    const why = 'The plan that the job is to move to is not on this tablet yet.';
    return {
      ok: false,
      code: 'plan-not-here',
      why,
      unlock: 'Connect it to the network for a moment.',
      index,
    };
  }
  return undefined;
}

async function readGround(s: Surroundings, by: string): Promise<Ground | undefined> {
  const [device, workshop, key] = await Promise.all([
    readDevice(s),
    s.db.workshop.get('workshop'),
    s.db.authorKeys.get(by),
  ]);
  return workshop && key ? { device: device.id, workshop, key } : undefined;
}

function noWorkshop(): Refusal {
  return {
    ok: false,
    code: 'no-workshop',
    why: 'This tablet does not have the workshop’s people and tools yet.',
    unlock: 'Connect it to the network for a moment.',
    index: 0,
  };
}

/** The drafts as entries, each judged on the state that the ones before it leave. */
function drawUp(
  s: Surroundings,
  view: JobView,
  drafts: readonly Draft[],
  { by, now, photos, device, workshop }: Ground & { by: string; now: number; photos: PreparedPhoto[] },
): { ok: true; entries: Entry[] } | Refusal {
  if (view.stopped) return { ok: false, code: view.stopped.code, why: view.stopped.words, index: 0 };
  const author = authorOf(workshop, by);
  if (!author) {
    const why = 'The workshop does not list this person as one of its people.';
    return { ok: false, code: 'unknown-person', why, index: 0 };
  }
  let state = view.state;
  const entries: Entry[] = [];
  for (const [index, draft] of drafts.entries()) {
    const parsed = parseEntry(
      cleanText({
        v: 1,
        id: s.newId(),
        job: view.job,
        plan: planInForce(view),
        basis: view.row.have?.seq ?? 0,
        workshop: workshop.seq,
        kind: draft.kind,
        step: draft.step,
        by,
        author,
        with: draft.with ?? [],
        device,
        deviceSeq: view.deviceSeq + index + 1,
        at: instantOf(now),
        data: draft.data,
        afterwards: draft.afterwards,
      }),
    );
    if (!parsed.ok) return malformed(parsed, index);
    const verdict = mayRecord(state, parsed.entry, workshop);
    if (!verdict.ok) return { ...verdict, index };
    state = applyEntry(state, parsed.entry);
    entries.push(parsed.entry);
  }
  return refusePhotos(view.state, entries, photos) ?? { ok: true, entries };
}

/** The outbox may hold the move to another plan. */
function planInForce({ row, pending }: JobView): string {
  return pending.reduce((plan, { entry }) => (entry.kind === 'plan-moved' ? entry.data.to : plan), row.plan);
}

function authorOf(workshop: WorkshopRow, by: string): Entry['author'] | undefined {
  const person = workshop.people.find(({ id }) => id === by);
  return person && { name: person.name, roles: person.roles };
}

function malformed(parsed: { newer: boolean; field?: string; why?: string }, index: number): Refusal {
  const field = parsed.field ?? 'entry';
  return {
    ok: false,
    code: 'malformed',
    why: `This can’t be written down: ${field.replace(/^data\./, '')}: ${parsed.why ?? 'unknown form'}. Nothing was recorded.`,
    index,
  };
}

/** A picture without its record, or a record without its picture, is nobody's proof. */
function refusePhotos(state: JobState, entries: Entry[], photos: PreparedPhoto[]): Refusal | undefined {
  const named = entries.flatMap((entry) => (entry.kind === 'photographed' ? [entry.data.photo] : []));
  const given = new Set(photos.map(({ hash }) => hash));
  const known = new Set(photosOf(state).map(({ hash }) => hash));
  const missing = named.find((hash) => !given.has(hash) && !known.has(hash));
  const unnamed = photos.find(({ hash }) => !named.includes(hash));
  if (missing === undefined && unnamed === undefined) return undefined;
  const why = 'A photograph and its record belong together. Nothing was recorded: take the photograph again.';
  return { ok: false, code: 'photo-apart', why, index: 0 };
}

async function signAll(
  s: Surroundings,
  entries: Entry[],
  drafts: readonly Draft[],
  { key, workshop }: Ground,
): Promise<Signed[]> {
  return Promise.all(
    entries.map(async (entry, index) => {
      const contentHash = contentHashOf(entry);
      const pin = drafts[index]?.pin;
      const digest = entry.kind === 'signed' ? entry.data.covers.digest : contentHash;
      const [signature, sealed] = await Promise.all([
        signContent(s.subtle, key, contentHash),
        pin === undefined ? undefined : sealPin(pin, workshop.sealingKey, { entryId: entry.id, digest }),
      ]);
      return { entry, contentHash, signature, sealed };
    }),
  );
}

/** Call it inside the transaction of the record that names the photographs. */
async function keepPhotos(
  db: FloorDatabase,
  job: string,
  photos: PreparedPhoto[],
  keptAt: string,
): Promise<void> {
  await db.photoBytes.bulkPut(photos.map(({ hash, bytes }) => ({ hash, bytes })));
  await db.photos.bulkPut(photos.map(({ hash, type }) => ({ hash, job, type, keptAt, sent: 0 })));
}

/** Writes all of it in one transaction; undefined if the job has changed since the rules were asked. */
async function writeAll(
  { db }: Surroundings,
  view: JobView,
  signed: Signed[],
  { key, workshop }: Ground,
  { photos, keptAt }: { photos: PreparedPhoto[]; keptAt: string },
): Promise<OutboxRow[] | undefined> {
  const tables = [db.jobs, db.counters, db.outbox, db.photos, db.photoBytes, db.authorKeys];
  return db.transaction('rw', tables, async () => {
    const [row, counter, present] = await Promise.all([
      db.jobs.get(view.job),
      db.counters.get(view.job),
      db.authorKeys.get(key.person),
    ]);
    const deviceSeq = counter?.deviceSeq ?? 0;
    const isUnchanged =
      row?.revision === view.row.revision && deviceSeq === view.deviceSeq && present?.id === key.id;
    if (!isUnchanged) return undefined;
    const place = counter?.place ?? 0;
    // What other tablets did and a restore took back is part of what was seen here, and the server can't know it.
    const isOnLost = view.pending.some((one) => one.restored && one.entry.device !== signed[0]?.entry.device);
    const rows = signed.map((one, index): OutboxRow => ({
      job: view.job,
      place: place + index + 1,
      id: one.entry.id,
      ...one,
      key: key.id,
      where: 'on this tablet',
      ...(isOnLost ? { restored: true } : {}),
      ...(workshop.restoredAt ? { workshopRestoredAt: workshop.restoredAt } : {}),
    }));
    await db.outbox.bulkAdd(rows);
    await keepPhotos(db, view.job, photos, keptAt);
    await db.counters.put({ job: view.job, deviceSeq: deviceSeq + rows.length, place: place + rows.length });
    await db.jobs.put({ ...row, revision: row.revision + 1 });
    return rows;
  });
}
