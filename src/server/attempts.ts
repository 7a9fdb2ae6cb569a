import { type Clock, MINUTE, stamp } from './clock';
import { sha256Hex } from './crypto';
import type { Trx } from './database';

/*
 * How often a password was tried. An attempt is counted before the password is hashed, so that many at once do not
 * get past the limit; whoever knows the password clears the count.
 */

const WINDOW_MS = 15 * MINUTE;
const MAX_ATTEMPTS = 10;

/** What sign-ins to an account are counted under; the same for an account that is there and one that is not. */
export function signInAttempts(email: string): string {
  return `sign-in ${sha256Hex(email.toLowerCase())}`;
}

/** Counts an attempt. One over the limit is not counted, and gives in how many minutes the next one is let in. */
export async function countAttempt(
  trx: Trx,
  key: string,
  clock: Clock,
): Promise<{ waitMinutes: number } | undefined> {
  const now = clock.now().getTime();
  const oldest = new Date(now - WINDOW_MS).toISOString();
  // Also those of others: names that a guesser made up are not kept for ever.
  await trx.deleteFrom('attempt_count').where('since', '<=', oldest).execute();
  const row = await trx.selectFrom('attempt_count').selectAll().where('key', '=', key).executeTakeFirst();
  if (row !== undefined && row.failed >= MAX_ATTEMPTS) {
    const waitMs = Date.parse(row.since) + WINDOW_MS - now;
    return { waitMinutes: Math.max(1, Math.ceil(waitMs / MINUTE)) };
  }
  const failed = (row?.failed ?? 0) + 1;
  await trx
    .insertInto('attempt_count')
    .values({ key, failed, since: stamp(clock) })
    .onConflict((conflict) => conflict.column('key').doUpdateSet({ failed }))
    .execute();
  return undefined;
}

/** Forgets the attempts, after a right one or a new password. */
export async function forgetAttempts(trx: Trx, key: string): Promise<void> {
  await trx.deleteFrom('attempt_count').where('key', '=', key).execute();
}

/** How long to wait, in words. */
export function waitWords(minutes: number): string {
  return minutes === 1 ? 'Wait a minute' : `Wait ${minutes} minutes`;
}
