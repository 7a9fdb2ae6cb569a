import { hashPassword, verifyPassword } from 'better-auth/crypto';
import type { Actor } from './actor';
import { countAttempt, forgetAttempts, waitWords } from './attempts';
import { type Clock, type Ids, stamp } from './clock';
import type { Db, Trx } from './database';
import { AppError } from './errors';

/** Makes the stored form of a password; slow by design, so never inside a transaction. */
export function hashNewPassword(password: string): Promise<string> {
  return hashPassword(password);
}

/** Checks the acting person's own password before something that needs it anew. */
export async function requirePassword(
  db: Db,
  actor: Actor,
  password: string,
  clock: Clock,
  field: string,
): Promise<void> {
  const key = `password ${actor.personId}`;
  const over = await db.transaction().execute((trx) => countAttempt(trx, key, clock));
  if (over !== undefined) {
    throw new AppError(
      'too-many-attempts',
      `The password was wrong too often. Nothing was changed. ${waitWords(over.waitMinutes)} and try again.`,
    );
  }
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
  await db.transaction().execute((trx) => forgetAttempts(trx, key));
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
