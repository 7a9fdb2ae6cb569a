import type { Db, Trx } from './database';

/** An entry that is already final: recorded with this content, or refused with it. */
export interface Known {
  contentHash: string;
  seq: number;
  hash: string;
}

export interface KnownRefusal {
  contentHash: string | null;
  code: string;
  reason: string;
}

export interface KeyRow {
  id: string;
  person: string;
  device: string;
  publicKey: string;
  revokedAt: string | null;
}

/** The author keys with these ids. */
export async function readKeys(db: Db, ids: readonly string[]): Promise<ReadonlyMap<string, KeyRow>> {
  if (ids.length === 0) return new Map();
  const rows = await db
    .selectFrom('author_key')
    .select([
      'id',
      'person_id as person',
      'device_id as device',
      'public_key as publicKey',
      'revoked_at as revokedAt',
    ])
    .where('id', 'in', ids)
    .execute();
  return new Map(rows.map((row) => [row.id, row]));
}

/** Which of these ids are recorded, and where. */
export async function readRecorded(trx: Trx, ids: readonly string[]): Promise<Map<string, Known>> {
  if (ids.length === 0) return new Map();
  const rows = await trx
    .selectFrom('job_entry')
    .select(['id', 'content_hash as contentHash', 'seq', 'hash'])
    .where('id', 'in', ids)
    .execute();
  return new Map(rows.map(({ id, ...known }) => [id, known]));
}

/** Which of these ids were refused, and why; more than once if other content came under the same id. */
export async function readRefused(trx: Trx, ids: readonly string[]): Promise<Map<string, KnownRefusal[]>> {
  if (ids.length === 0) return new Map();
  const rows = await trx
    .selectFrom('refused_entry')
    .select(['entry_id', 'content_hash as contentHash', 'code', 'message as reason'])
    .where('entry_id', 'in', ids)
    .orderBy('at')
    .execute();
  const refused = new Map<string, KnownRefusal[]>();
  for (const { entry_id, ...known } of rows) {
    if (entry_id !== null) refused.set(entry_id, [...(refused.get(entry_id) ?? []), known]);
  }
  return refused;
}
