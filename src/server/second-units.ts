import type { SecondUnits } from '@/domain/second-unit';
import { type Actor, requireRole } from './actor';
import type { Clock, Ids } from './clock';
import type { Db, Trx } from './database';
import { appendWorkshopEntry } from './workshop-trail';

const KEY = 'workshop.second-units';

/** Whether the workshop shows a second unit beside SI. */
export async function readSecondUnits(db: Db): Promise<SecondUnits> {
  const row = await db.selectFrom('setting').select('value').where('key', '=', KEY).executeTakeFirst();
  return row?.value === 'inch and pound' ? 'inch and pound' : 'none';
}

/** Chooses it. What is recorded stays in SI either way, so the trail tells of it and nothing else changes. */
export async function setSecondUnits(
  trx: Trx,
  actor: Actor,
  shown: SecondUnits,
  app: { clock: Clock; ids: Ids },
): Promise<void> {
  requireRole(actor, 'owner');
  if (shown === (await readSecondUnits(trx))) return;
  await trx
    .insertInto('setting')
    .values({ key: KEY, value: shown })
    .onConflict((conflict) => conflict.column('key').doUpdateSet({ value: shown }))
    .execute();
  await appendWorkshopEntry(trx, actor, { kind: 'second-units-changed', data: { shown } }, app);
}
