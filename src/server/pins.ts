import { randomBytes, scrypt, timingSafeEqual } from 'node:crypto';
import * as z from 'zod';
import type { SigningPinRow } from '@db/tables';
import type { Actor } from './actor';
import { type Clock, HOUR, type Ids, MINUTE, stamp } from './clock';
import type { Db, Trx } from './database';
import { AppError } from './errors';
import { appendWorkshopEntry } from './workshop-trail';

/*
 * A PIN is six digits, so it is only as good as the limit on guesses. An attempt is counted and, at the limit,
 * locked before the PIN is hashed: many attempts at once cannot get past. The count falls back only when the
 * PIN was right.
 */

const scryptParams = z.strictObject({ N: z.int(), r: z.int(), p: z.int(), length: z.int() });
type ScryptParams = z.infer<typeof scryptParams>;

const PARAMS: ScryptParams = { N: 16_384, r: 8, p: 1, length: 32 };
const FREE_ATTEMPTS = 5;
const FIRST_LOCK_MS = 15 * MINUTE;
const LONGEST_LOCK_MS = 24 * HOUR;

export type PinCheck =
  | { result: 'right' }
  /** `left` is how many more may be wrong before the lock. */
  | { result: 'wrong'; left: number; lockedUntil?: string }
  | { result: 'locked'; until: string }
  | { result: 'none set' };

/** Why and from where a PIN was tried; its owner reads this in their list of attempts. */
export interface PinUse {
  purpose: string;
  deviceId?: string | undefined;
}

export interface PinStatus {
  hasPin: boolean;
  setAt: string | null;
  lockedUntil: string | null;
  attempts: { at: string; outcome: 'right' | 'wrong' | 'locked'; purpose: string; tablet: string | null }[];
}

/** A PIN as it is stored. */
export type HashedPin = Pick<SigningPinRow, 'hash' | 'salt' | 'params'>;

/** Hashes a new PIN; slow by design, so never inside a transaction. */
export async function hashNewPin(pin: string): Promise<HashedPin> {
  if (isEasyPin(pin)) {
    throw new AppError(
      'invalid-field',
      'This PIN is too easy to guess. Choose six digits that are no row and no repeat.',
      { field: 'pin' },
    );
  }
  const salt = randomBytes(16);
  const hash = await hashPin(pin, salt, PARAMS);
  return {
    hash: hash.toString('base64url'),
    salt: salt.toString('base64url'),
    params: JSON.stringify(PARAMS),
  };
}

/** Stores the acting person's own PIN; check their password first. A lock on the old one falls with it. */
export async function storePin(
  trx: Trx,
  actor: Actor,
  hashed: HashedPin,
  app: { clock: Clock; ids: Ids },
): Promise<void> {
  const row = { ...hashed, failed: 0, locked_until: null, set_at: stamp(app.clock) };
  await trx
    .insertInto('signing_pin')
    .values({ person_id: actor.personId, ...row })
    .onConflict((conflict) => conflict.column('person_id').doUpdateSet(row))
    .execute();
  await appendWorkshopEntry(trx, actor, { kind: 'pin-set', data: { person: actor.personId } }, app);
}

/**
 * Checks somebody's PIN and counts the attempt.
 *
 * Never call it inside a transaction: hashing takes as long as it should, and an attempt must stay counted
 * even if what it was for is rolled back.
 */
export async function checkPin(
  app: { db: Db; clock: Clock; ids: Ids },
  personId: string,
  pin: string,
  use: PinUse,
): Promise<PinCheck> {
  const counted = await app.db.transaction().execute((trx) => countAttempt(trx, app.clock, personId));
  if ('result' in counted) {
    if (counted.result === 'locked') await logAttempt(app, personId, 'locked', use);
    return counted;
  }
  const { row, failed, lockedUntil } = counted;
  const params = scryptParams.parse(JSON.parse(row.params));
  const hash = await hashPin(pin, Buffer.from(row.salt, 'base64url'), params);
  const isRight = timingSafeEqual(hash, Buffer.from(row.hash, 'base64url'));
  await app.db.transaction().execute(async (trx) => {
    await logAttempt({ ...app, db: trx }, personId, isRight ? 'right' : 'wrong', use);
    if (isRight) {
      await trx
        .updateTable('signing_pin')
        .set({ failed: 0, locked_until: null })
        .where('person_id', '=', personId)
        .where('set_at', '=', row.set_at)
        .execute();
    }
  });
  if (isRight) return { result: 'right' };
  const left = Math.max(0, FREE_ATTEMPTS - failed);
  return lockedUntil === null ? { result: 'wrong', left } : { result: 'wrong', left, lockedUntil };
}

/** The acting person's own PIN: whether it is set, locked, and how it was tried of late. */
export async function getPinStatus(db: Db, actor: Actor, clock: Clock): Promise<PinStatus> {
  const row = await findPin(db, actor.personId);
  const attempts = await db
    .selectFrom('pin_attempt')
    .leftJoin('device', 'device.id', 'pin_attempt.device_id')
    .select(['pin_attempt.at', 'outcome', 'purpose', 'device.name as tablet'])
    .where('person_id', '=', actor.personId)
    .orderBy('pin_attempt.at', 'desc')
    .orderBy('pin_attempt.id', 'desc')
    .limit(20)
    .execute();
  const lockedUntil = row?.locked_until ?? null;
  return {
    hasPin: row !== undefined,
    setAt: row?.set_at ?? null,
    lockedUntil: lockedUntil !== null && lockedUntil > stamp(clock) ? lockedUntil : null,
    attempts,
  };
}

/** How long a PIN is locked after so many wrong attempts in a row. */
export function lockMs(failed: number): number {
  if (failed < FREE_ATTEMPTS) return 0;
  return Math.min(FIRST_LOCK_MS * 2 ** (failed - FREE_ATTEMPTS), LONGEST_LOCK_MS);
}

/** Whether a PIN is one that a stranger would try first: one digit repeated, a row, or pairs and triples. */
export function isEasyPin(pin: string): boolean {
  const isRow = '0123456789012345 9876543210987654'.includes(pin);
  const isRepeat = pin === pin.slice(0, 2).repeat(3) || pin === pin.slice(0, 3).repeat(2);
  return isRow || isRepeat;
}

async function countAttempt(
  trx: Trx,
  clock: Clock,
  personId: string,
): Promise<
  | { result: 'none set' }
  | { result: 'locked'; until: string }
  | { row: SigningPinRow; failed: number; lockedUntil: string | null }
> {
  const row = await findPin(trx, personId);
  if (row === undefined) return { result: 'none set' };
  if (row.locked_until !== null && row.locked_until > stamp(clock)) {
    return { result: 'locked', until: row.locked_until };
  }
  const failed = row.failed + 1;
  const lock = lockMs(failed);
  const lockedUntil = lock === 0 ? null : new Date(clock.now().getTime() + lock).toISOString();
  await trx
    .updateTable('signing_pin')
    .set({ failed, locked_until: lockedUntil })
    .where('person_id', '=', personId)
    .execute();
  return { row, failed, lockedUntil };
}

async function logAttempt(
  app: { db: Db; clock: Clock; ids: Ids },
  personId: string,
  outcome: 'right' | 'wrong' | 'locked',
  use: PinUse,
): Promise<void> {
  await app.db
    .insertInto('pin_attempt')
    .values({
      id: app.ids.next(),
      person_id: personId,
      at: stamp(app.clock),
      outcome,
      purpose: use.purpose,
      device_id: use.deviceId ?? null,
    })
    .execute();
}

function findPin(db: Db, personId: string): Promise<SigningPinRow | undefined> {
  return db.selectFrom('signing_pin').selectAll().where('person_id', '=', personId).executeTakeFirst();
}

function hashPin(pin: string, salt: Buffer, { N, r, p, length }: ScryptParams): Promise<Buffer> {
  return new Promise((resolve, reject) => {
    scrypt(pin, salt, length, { N, r, p, maxmem: 256 * N * r }, (error, key) =>
      error === null ? resolve(key) : reject(error),
    );
  });
}
