import { canonicalJson } from '@/domain/canonical';
import { chainHash, contentHash } from '@/domain/trail';
import { NO_PREVIOUS } from '@/domain/trail-hash';
import { type Actor, requireRole, THE_WORKSHOP } from './actor';
import { type Clock, type Ids, stamp } from './clock';
import { sha256Hex } from './crypto';
import type { Db, Trx } from './database';

/*
 * The workshop's own trail: people, roles, keys, tablets, tools, calibrations, releases, jobs opened, signed
 * heads, erasures. Every change to one of these appends here in the same transaction, so that none can be
 * made afterwards unseen. The chain starts with the first person and has no gaps.
 */

/** What a workshop entry may hold: JSON whose numbers are safe integers; measured values are text. */
export type EntryData =
  string | number | boolean | null | readonly EntryData[] | { readonly [key: string]: EntryData };

export const WORKSHOP_KINDS = [
  'workshop-set',
  'second-units-changed',
  'witness-address-changed',
  'workshop-key-renewed',
  'person-added',
  'person-renamed',
  'roles-changed',
  'authorisation-changed',
  'person-deactivated',
  'person-reactivated',
  'pin-set',
  'tablet-enrolled',
  'tablet-renamed',
  'tablet-lost',
  'tablet-found',
  'tablet-file-brought',
  'key-enrolled',
  'key-revoked',
  'tool-added',
  'tool-changed',
  'tool-withdrawn',
  'tool-returned',
  'calibration-recorded',
  'document-released',
  'document-withdrawn',
  'job-opened',
  'head-signed',
  'exported',
  'erased',
  'restored',
] as const;

export type WorkshopKind = (typeof WORKSHOP_KINDS)[number];

/** An entry of the workshop trail as it is recorded and hashed. */
export interface WorkshopEntry {
  v: 1;
  id: string;
  kind: WorkshopKind;
  by: string;
  author: { name: string; roles: readonly string[] };
  at: string;
  data: Readonly<Record<string, EntryData>>;
  seq: number;
  recordedAt: string;
  prev: string;
}

/** Appends to the workshop trail; must run in the transaction that makes the change it tells of. */
export async function appendWorkshopEntry(
  trx: Trx,
  actor: Actor,
  entry: { kind: WorkshopKind; data: Readonly<Record<string, EntryData>> },
  { clock, ids }: { clock: Clock; ids: Ids },
): Promise<{ seq: number; hash: string }> {
  const last = await trx
    .selectFrom('workshop_entry')
    .select(['seq', 'hash'])
    .orderBy('seq', 'desc')
    .limit(1)
    .executeTakeFirst();
  const at = stamp(clock);
  const authored = {
    v: 1 as const,
    id: ids.next(),
    kind: entry.kind,
    by: actor.personId,
    author: { name: actor.name, roles: [...actor.roles] },
    at,
    data: entry.data,
  };
  const recorded: WorkshopEntry = {
    ...authored,
    seq: (last?.seq ?? 0) + 1,
    recordedAt: at,
    prev: last?.hash ?? NO_PREVIOUS,
  };
  const body = canonicalJson(recorded);
  const hash = chainHash(recorded, sha256Hex);
  await trx
    .insertInto('workshop_entry')
    .values({
      seq: recorded.seq,
      id: recorded.id,
      kind: recorded.kind,
      by_person: recorded.by === THE_WORKSHOP.personId ? null : recorded.by,
      at,
      body,
      content_hash: contentHash(authored, sha256Hex),
      hash,
    })
    .execute();
  return { seq: recorded.seq, hash };
}

/** When the record was last restored from a backup, as far as its trails tell; undefined if it never was. */
export async function findLastRestore(db: Db): Promise<string | undefined> {
  const noted = await db
    .selectFrom('workshop_entry')
    .select('at')
    .where('kind', '=', 'restored')
    .orderBy('seq', 'desc')
    .limit(1)
    .executeTakeFirst();
  return noted?.at;
}

/** The number of the newest workshop entry; a job entry names the one it was judged by. */
export async function workshopSeq(db: Db): Promise<number> {
  const row = await db
    .selectFrom('workshop_entry')
    .select('seq')
    .orderBy('seq', 'desc')
    .limit(1)
    .executeTakeFirst();
  return row?.seq ?? 0;
}

/** Entries of the workshop trail after a number, in order, as they were recorded and hashed. */
export async function listWorkshopEntries(
  db: Db,
  actor: Actor,
  { after, limit }: { after: number; limit: number },
): Promise<{ seq: number; hash: string; entry: Record<string, unknown> }[]> {
  requireRole(actor, 'supervisor', 'quality lead', 'auditor', 'owner');
  const rows = await db
    .selectFrom('workshop_entry')
    .select(['seq', 'body', 'hash'])
    .where('seq', '>', after)
    .orderBy('seq')
    .limit(limit)
    .execute();
  return rows.map(({ seq, hash, body }) => ({
    seq,
    hash,
    entry: JSON.parse(body) as Record<string, unknown>,
  }));
}
