import { THE_WORKSHOP } from './actor';
import type { Clock, Ids } from './clock';
import type { Db } from './database';
import type { Keys } from './keys';
import { appendWorkshopEntry } from './workshop-trail';

interface Noting {
  db: Db;
  keys: Keys;
  clock: Clock;
  ids: Ids;
}

/**
 * Tells in the workshop's trail of every key that signs in the workshop's name since the one before it, once. A
 * key is made while the server is down, so it is told of at the next start, before it has signed anything.
 */
export async function noteKeyRenewals(app: Noting): Promise<void> {
  const renewed = app.keys.workshopKeys.filter(({ signedBefore }) => signedBefore !== null);
  if (renewed.length === 0) return;
  await app.db.transaction().execute(async (trx) => {
    const rows = await trx
      .selectFrom('workshop_entry')
      .select('body')
      .where('kind', '=', 'workshop-key-renewed')
      .execute();
    const told = rows.map(({ body }) => (JSON.parse(body) as { data: { key: string } }).data.key);
    // A workshop without anybody has no trail yet: then nobody has seen the first key either.
    const begun = await trx.selectFrom('workshop_entry').select('seq').limit(1).executeTakeFirst();
    if (begun === undefined) return;
    for (const { key, since } of renewed.filter((one) => !told.includes(one.key))) {
      const before = app.keys.workshopKeys[app.keys.workshopKeys.findIndex((one) => one.key === key) - 1];
      const data = { key, since, before: before?.key ?? '' };
      await appendWorkshopEntry(trx, THE_WORKSHOP, { kind: 'workshop-key-renewed', data }, app);
    }
  });
}
