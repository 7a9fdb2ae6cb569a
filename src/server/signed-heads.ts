import { headMessage } from '@/domain/trail';
import type { SignedHead } from '@/domain/trail-export';
import type { Actor } from './actor';
import { type Clock, type Ids, stamp } from './clock';
import type { Db, Trx } from './database';
import { notFound } from './errors';
import { type Keys, signWithHeadKey } from './keys';
import { appendWorkshopEntry } from './workshop-trail';

/** The trail's name of the workshop's own trail; every other trail is named by its job. */
export const WORKSHOP_TRAIL = 'workshop';

interface Signing {
  clock: Clock;
  ids: Ids;
  keys: Keys;
}

/** Signs the newest entry of a trail; a head that is signed already is given out again. */
export async function signHead(trx: Trx, actor: Actor, trail: string, app: Signing): Promise<SignedHead> {
  const last = await findLast(trx, trail);
  if (last === undefined) throw notFound('This trail');
  return signHeadAt(trx, actor, { trail, ...last }, app);
}

/** Signs one entry of a trail; a head that is signed already is given out again. */
export async function signHeadAt(
  trx: Trx,
  actor: Actor,
  { trail, seq, hash }: { trail: string; seq: number; hash: string },
  app: Signing,
): Promise<SignedHead> {
  const known = await trx
    .selectFrom('signed_head')
    .selectAll()
    .where('trail', '=', trail)
    .where('seq', '=', seq)
    .executeTakeFirst();
  if (known !== undefined) return known;
  const unsigned = { trail, seq, hash, at: stamp(app.clock), key: app.keys.head.fingerprint };
  const head = { ...unsigned, signature: signWithHeadKey(app.keys.head, headMessage(unsigned)) };
  await trx.insertInto('signed_head').values(head).execute();
  // The workshop's trail remembers the heads of jobs, so a job cannot vanish; its own head would never end.
  if (trail !== WORKSHOP_TRAIL)
    await appendWorkshopEntry(trx, actor, { kind: 'head-signed', data: head }, app);
  return head;
}

/** The signed heads of a trail, the oldest first. */
export function listSignedHeads(db: Db, trail: string): Promise<SignedHead[]> {
  return db.selectFrom('signed_head').selectAll().where('trail', '=', trail).orderBy('seq').execute();
}

function findLast(trx: Trx, trail: string): Promise<{ seq: number; hash: string } | undefined> {
  if (trail === WORKSHOP_TRAIL) {
    return trx
      .selectFrom('workshop_entry')
      .select(['seq', 'hash'])
      .orderBy('seq', 'desc')
      .limit(1)
      .executeTakeFirst();
  }
  return trx
    .selectFrom('job_entry')
    .select(['seq', 'hash'])
    .where('job_id', '=', trail)
    .orderBy('seq', 'desc')
    .limit(1)
    .executeTakeFirst();
}
