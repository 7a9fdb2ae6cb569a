/*
 * What a tablet holds in IndexedDB. Two things always hold: a record that a person made is in exactly one
 * of `outbox`, `entries` and `refused`, and the confirmed entries of a job are numbered 1 to `have.seq`
 * without a gap. Every write that changes what a job looks like raises the `revision` of its row.
 */
import { Dexie, type Table } from 'dexie';
import type { Entry, Recorded } from '@/domain/entry';
import type { SecondUnits } from '@/domain/second-unit';
import type { Workshop } from '@/domain/job-state';
import type { Plan } from '@/domain/plan';

/** A point of a trail: the number of its last entry and that entry's hash. */
export interface TrailPoint {
  seq: number;
  hash: string;
}

/** A PIN that only the server can open. */
export interface SealedPin {
  keyId: string;
  enc: string;
  ciphertext: string;
}

export interface MetaRow {
  key: string;
  value: unknown;
}

export interface AuthorKeyRow {
  person: string;
  /** The first 16 hex digits of the SHA-256 of the raw public point. */
  id: string;
  /** The raw point, base64url. */
  publicKey: string;
  /** Its private half can't be taken out of this browser. */
  pair: CryptoKeyPair;
  /** The `seq` of the workshop's trail that says so; absent until the server knows the key. */
  enrolled?: number | undefined;
}

export interface SignedInRow {
  person: string;
  name: string;
  roles: string[];
  /** RFC 3339, UTC. */
  sessionUntil: string;
}

export interface WorkshopRow extends Workshop {
  key: 'workshop';
  name: string;
  /** When the server had last been restored: another restore takes back what the number of this means. */
  restoredAt?: string | null | undefined;
  people: (Workshop['people'][number] & { hasPin: boolean })[];
  sealingKey: { id: string; publicKey: string };
  /** What stands beside SI; a tablet that was filled before there was a choice shows none. */
  secondUnits?: SecondUnits | undefined;
}

/** A tablet that has a part in a job, and when the server last heard of it. */
export interface JobTablet {
  id: string;
  name: string;
  lastHeardAt: string | null;
  lastRecordedAt: string;
}

export interface JobRow {
  id: string;
  number: string;
  label: string;
  engine: string;
  registration?: string | undefined;
  /** Hash of the plan in force. */
  plan: string;
  phase: string;
  people: string[];
  promisedOn?: string | undefined;
  /** The tablets that had recorded in the job when the list of jobs was last brought, the last first. */
  tablets?: JobTablet[] | undefined;
  /** Where the server's trail stood when it was last heard. */
  head: TrailPoint;
  /** Where this tablet's copy of the trail stands; null before the first entry. */
  have: TrailPoint | null;
  availableOffline: boolean;
  revision: number;
  /** Why nothing more can be recorded on the job here for now. */
  stopped?: { code: string; words: string } | undefined;
}

export interface PlanRow {
  hash: string;
  plan: Plan;
}

export interface EntryRow {
  job: string;
  seq: number;
  id: string;
  device: string;
  recorded: Recorded;
  hash: string;
  contentHash: string;
  signature: string;
  key: string;
  /** Kept for a server that was restored from a backup and has to check the PIN again. */
  sealed?: SealedPin | undefined;
}

/** Where a record is, in the words that the Floor shows. */
export type Whereabouts = 'on this tablet' | 'sent' | 'waiting' | 'refused';

export interface OutboxRow {
  job: string;
  /** Order within the job; negative for what a restored server lacks, so that it goes first. */
  place: number;
  id: string;
  entry: Entry;
  contentHash: string;
  signature: string;
  key: string;
  sealed?: SealedPin | undefined;
  where: Exclude<Whereabouts, 'refused'>;
  code?: string | undefined;
  reason?: string | undefined;
  /** It was made on a trail of which a restore of the server took the end. */
  restored?: true | undefined;
  /** When the server had last been restored, as far as the workshop told by which this was made. */
  workshopRestoredAt?: string | undefined;
}

export interface RefusedRow {
  id: string;
  job: string;
  entry: Entry;
  contentHash: string;
  signature: string;
  key: string;
  code: string;
  reason: string;
  refusedAt: string;
  /**
   * The `seq` of the trail's entry that tells of it. Null where the trail to its end does not: the server was
   * restored to a time before, and has to hear of it again.
   */
  inTrail?: number | null | undefined;
}

/** Confirmed entries as they stood before the server was restored from a backup. */
export interface SetAsideRow {
  hash: string;
  job: string;
  row: EntryRow;
  setAsideAt: string;
}

export interface CounterRow {
  job: string;
  /** The last number that this tablet gave out on the job. */
  deviceSeq: number;
  /** The last place given out in the job's part of the outbox; unlike the number, it outlives a new device id. */
  place: number;
}

export interface PhotoRow {
  hash: string;
  job: string;
  type: string;
  keptAt: string;
  /** 0 or 1: IndexedDB has no index over booleans. */
  sent: 0 | 1;
  /** What the server said the last time it didn't take it. */
  trouble?: string | undefined;
}

/** Apart from what is known of the photograph, so that a change of that does not write megabytes. */
export interface PhotoBytesRow {
  hash: string;
  /** An ArrayBuffer, because Safari loses Blobs. */
  bytes: ArrayBuffer;
}

export interface PlaceRow {
  job: string;
  step: string | null;
  /** Whatever the screen needs to come back exactly; plain JSON. */
  screen: unknown;
  /** Milliseconds; asks "was it turned?" after a long silence. */
  lastActivityAt: number;
}

export type FloorDatabase = Dexie & {
  meta: Table<MetaRow, string>;
  authorKeys: Table<AuthorKeyRow, string>;
  signedIn: Table<SignedInRow, string>;
  workshop: Table<WorkshopRow, string>;
  jobs: Table<JobRow, string>;
  plans: Table<PlanRow, string>;
  entries: Table<EntryRow, [string, number]>;
  outbox: Table<OutboxRow, [string, number]>;
  refused: Table<RefusedRow, string>;
  setAside: Table<SetAsideRow, string>;
  counters: Table<CounterRow, string>;
  photos: Table<PhotoRow, string>;
  photoBytes: Table<PhotoBytesRow, string>;
  places: Table<PlaceRow, string>;
};

/**
 * One line a version, never changed once released: a version names only the stores that it adds or whose
 * indexes change, and `upgrade` in `openFloorDatabase` says what happens to rows. An outbox outlives them all.
 */
const VERSIONS: readonly Record<string, string>[] = [
  {
    meta: 'key',
    authorKeys: 'person',
    signedIn: 'person',
    workshop: 'key',
    jobs: 'id',
    plans: 'hash',
    entries: '[job+seq], id, device',
    outbox: '[job+place], id, where',
    refused: 'id, job',
    setAside: 'hash, job',
    counters: 'job',
    photos: 'hash, job, sent',
    photoBytes: 'hash',
    places: 'job',
  },
];

/** Opens the tablet's database; `strict` means that a commit is on the disk before it is told. */
export function openFloorDatabase(name = 'witnessmark'): FloorDatabase {
  const db = new Dexie(name, { chromeTransactionDurability: 'strict' });
  VERSIONS.forEach((stores, index) => {
    db.version(index + 1).stores(stores);
  });
  return db as FloorDatabase;
}

/** The rows of one job in `entries` or `outbox`, in order. */
export function ofJob<Row>(table: Table<Row, [string, number]>, job: string, after = -Infinity) {
  return table.where(':id').between([job, after], [job, Infinity], after === -Infinity, true);
}

/** Raises the job's revision with the changes given; call it inside a transaction that holds `jobs`. */
export async function changeJob(db: FloorDatabase, job: string, change: Partial<JobRow>): Promise<void> {
  const row = await db.jobs.get(job);
  if (row) await db.jobs.put({ ...row, ...change, revision: row.revision + 1 });
}
