import { THE_WORKSHOP } from './actor';
import type { Clock, Ids } from './clock';
import type { Db } from './database';
import { appendWorkshopEntry, workshopSeq } from './workshop-trail';

/*
 * A tablet that names a workshop entry past the newest one knew a workshop that a restore took back. The numbers
 * that were lost are made up by entries that say so: every export then holds what its entries name, no number
 * ever comes to mean something else, and the tablets see that there is a newer workshop to fetch.
 */

/** More than a workshop writes between two backups; a number beyond it was never there. */
const MOST_LOST = 2000;

/** Makes up the lost numbers up to one that a proved entry names, if they can have been there. */
export async function makeUpLost(
  app: { db: Db; clock: Clock; ids: Ids },
  tablet: string,
  named: number,
): Promise<void> {
  if (!isLost(await workshopSeq(app.db), named)) return;
  await app.db.transaction().execute(async (trx) => {
    const after = await workshopSeq(trx);
    if (!isLost(after, named)) return;
    // One more than was lost, so that the tablet's own copy is no longer the newest.
    for (let seq = after + 1; seq <= named + 1; seq += 1) {
      await appendWorkshopEntry(
        trx,
        THE_WORKSHOP,
        { kind: 'restored', data: { after, upTo: named, tablet } },
        app,
      );
    }
  });
}

function isLost(newest: number, named: number): boolean {
  return named > newest && named <= newest + MOST_LOST;
}
