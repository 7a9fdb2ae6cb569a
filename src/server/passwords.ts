import { hashPassword, verifyPassword } from 'better-auth/crypto';
import type { Actor } from './actor';
import { type Clock, type Ids, MINUTE, stamp } from './clock';
import type { Db, Trx } from './database';
import { AppError } from './errors';

const WINDOW_MS = 15 * MINUTE;
const MAX_WRONG = 10;

/** Makes the stored form of a password; slow by design, so never inside a transaction. */
export function hashNewPassword(password: string): Promise<string> {
  return hashPassword(password);
}

/**
 * Checks the acting person's own password before something that needs it anew.
 *
 * An attempt is counted before the password is hashed, so that many at once do not get past the limit; a
 * right one clears the count.
 */
export async function requirePassword(
  db: Db,
  actor: Actor,
  password: string,
  clock: Clock,
  field: string,
): Promise<void> {
  const key = `password ${actor.personId}`;
  await db.transaction().execute((trx) => countAttempt(trx, key, clock));
  const account = await db
    .selectFrom('account')
    .select('password')
    .where('userId', '=', actor.personId)
    .where('providerId', '=', 'credential')
    .executeTakeFirst();
  const isRight =
    typeof account?.password === 'string' && (await verifyPassword({ hash: account.password, password }));
  if (!isRight)
    throw new AppError('wrong-password', 'This is not your password. Nothing was changed. Try again.', {
      field,
    });
  await db.deleteFrom('attempt_count').where('key', '=', key).execute();
}

/** Stores a password and ends every session of its person but one. */
export async function storePassword(
  trx: Trx,
  personId: string,
  hash: string,
  { keepSession, clock, ids }: { keepSession?: string | undefined; clock: Clock; ids: Ids },
): Promise<void> {
  const at = stamp(clock);
  const account = await trx
    .selectFrom('account')
    .select('id')
    .where('userId', '=', personId)
    .where('providerId', '=', 'credential')
    .executeTakeFirst();
  if (account === undefined) {
    await trx
      .insertInto('account')
      .values({
        id: ids.next(),
        accountId: personId,
        providerId: 'credential',
        userId: personId,
        accessToken: null,
        refreshToken: null,
        idToken: null,
        accessTokenExpiresAt: null,
        refreshTokenExpiresAt: null,
        scope: null,
        password: hash,
        createdAt: at,
        updatedAt: at,
      })
      .execute();
  } else {
    await trx
      .updateTable('account')
      .set({ password: hash, updatedAt: at })
      .where('id', '=', account.id)
      .execute();
  }
  await trx
    .deleteFrom('session')
    .where('userId', '=', personId)
    .where('id', '!=', keepSession ?? '')
    .execute();
}

async function countAttempt(trx: Trx, key: string, clock: Clock): Promise<void> {
  const row = await trx.selectFrom('attempt_count').selectAll().where('key', '=', key).executeTakeFirst();
  const now = clock.now().getTime();
  const isOld = row === undefined || now - new Date(row.since).getTime() >= WINDOW_MS;
  if (!isOld && row.failed >= MAX_WRONG) {
    throw new AppError(
      'too-many-attempts',
      'The password was wrong too often. Nothing was changed. Wait 15 minutes and try again.',
    );
  }
  const next = isOld ? { failed: 1, since: stamp(clock) } : { failed: row.failed + 1, since: row.since };
  await trx
    .insertInto('attempt_count')
    .values({ key, ...next })
    .onConflict((conflict) => conflict.column('key').doUpdateSet(next))
    .execute();
}
