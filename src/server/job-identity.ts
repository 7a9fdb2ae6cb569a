import { createHmac } from 'node:crypto';
import { identityCommitment } from '@/domain/trail';
import { type Actor, hasRole } from './actor';
import type { Db, Trx } from './database';
import { AppError } from './errors';

/*
 * Who the customer is and which vehicle it is. The trail only commits to each of these under a salt of its own;
 * the values lie beside it, so that they can be erased without breaking anything.
 */

export const IDENTITY_FIELDS = [
  'registration',
  'vin',
  'customerName',
  'customerEmail',
  'customerPhone',
  'complaint',
  'approver',
] as const;

export type IdentityField = (typeof IDENTITY_FIELDS)[number];

export type Identity = Partial<Record<IdentityField, { value: string; salt: string } | undefined>>;

const REQUIRED = ['registration', 'customerName', 'customerEmail'] as const satisfies IdentityField[];

/** What names the vehicle and not the customer. */
const VEHICLE_FIELDS: readonly string[] = ['registration', 'vin', 'complaint'] satisfies IdentityField[];

/** Lets a job in only with exactly the values that its first entry commits to. */
export function requireCommitted(identity: Identity, commitments: Readonly<Record<string, string>>): void {
  const given = sentFields(identity);
  const missing = REQUIRED.find((field) => identity[field] === undefined);
  if (missing !== undefined) throw wrong(missing, 'is needed to open a job');
  const uncommitted = Object.keys(commitments).find((field) => !given.some(([sent]) => sent === field));
  if (uncommitted !== undefined) throw wrong(uncommitted, 'is committed to in the entry and not sent');
  for (const [field, value] of given) {
    if (commitments[field] === undefined) throw wrong(field, 'is sent and not committed to in the entry');
    if (identityCommitment(value, hmacSha256) !== commitments[field]) {
      throw wrong(field, 'is not the value that the entry commits to');
    }
  }
}

/** HMAC-SHA-256 in lower-case hex. */
export function hmacSha256(key: Uint8Array, message: Uint8Array): string {
  return createHmac('sha256', key).update(message).digest('hex');
}

/** Keeps the values beside the trail. */
export async function storeIdentity(trx: Trx, job: string, identity: Identity): Promise<void> {
  const rows = sentFields(identity).map(([field, { value, salt }]) => ({ job_id: job, field, value, salt }));
  await trx.insertInto('job_identity').values(rows).execute();
}

/** The values that this person may see: contact data is for those who speak with the customer. */
export async function readIdentity(
  db: Db,
  actor: Actor,
  job: string,
): Promise<{ known: Record<string, { value: string; salt: string }>; withheld: string[] }> {
  const rows = await db
    .selectFrom('job_identity')
    .select(['field', 'value', 'salt'])
    .where('job_id', '=', job)
    .execute();
  const seesAll = hasRole(actor, 'supervisor', 'owner');
  const isSeen = (field: string) => seesAll || VEHICLE_FIELDS.includes(field);
  return {
    known: Object.fromEntries(
      rows.filter(({ field }) => isSeen(field)).map(({ field, value, salt }) => [field, { value, salt }]),
    ),
    withheld: rows.map(({ field }) => field).filter((field) => !isSeen(field)),
  };
}

/** The registration of each of these jobs, as far as it was not erased. */
export async function readRegistrations(
  db: Db,
  jobs: readonly string[],
): Promise<ReadonlyMap<string, string>> {
  if (jobs.length === 0) return new Map();
  const rows = await db
    .selectFrom('job_identity')
    .select(['job_id', 'value'])
    .where('field', '=', 'registration')
    .where('job_id', 'in', jobs)
    .execute();
  return new Map(rows.map((row) => [row.job_id, row.value]));
}

function sentFields(identity: Identity): [field: string, value: { value: string; salt: string }][] {
  return Object.entries(identity).flatMap(([field, value]) => (value === undefined ? [] : [[field, value]]));
}

function wrong(field: string, why: string): AppError {
  return new AppError('invalid-field', `identity.${field} ${why}. Nothing was opened.`, {
    field: `identity.${field}`,
  });
}
