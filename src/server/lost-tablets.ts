import { type Actor } from './actor';
import type { Db, Trx } from './database';
import { type JobFold, getFold, UNHEARD } from './job-fold';
import { type OfficeEntry, recordOfficeEntries, type Recording } from './office-entries';
import { appendWorkshopEntry } from './workshop-trail';

/*
 * Nobody can know what a lost tablet still held, so every open job in which it ever recorded is told from which
 * of its numbers on nothing came. Nothing waits for those numbers from then on, and what does come later, by a
 * file or because the tablet is found, is still taken as what happened.
 */

/** Notes that a tablet is lost, in the workshop's trail and in each open job in which it ever recorded. */
export async function recordLoss(
  within: Recording,
  actor: Actor,
  { id, name }: { id: string; name: string },
  reason: string,
): Promise<JobFold[]> {
  const { app, memory, trx } = within;
  const folds = await Promise.all((await listOpenJobsOf(trx, id)).map((job) => getFold(memory, job, trx)));
  const untold = folds.filter((fold) => !isTold(fold, id));
  const entries = untold.map(({ job, heard }): OfficeEntry => ({
    job,
    kind: 'tablet-lost',
    data: { tablet: id, from: (heard.get(id) ?? UNHEARD).number + 1 },
  }));
  const changed = await recordOfficeEntries(within, entries);
  await appendWorkshopEntry(
    trx,
    actor,
    {
      kind: 'tablet-lost',
      data: { tablet: id, name, reason, jobs: folds.map(({ job }) => job) },
    },
    app,
  );
  return changed;
}

/** Which of these tablets are declared lost. */
export async function findLost(reader: Db, tablets: readonly string[]): Promise<ReadonlyMap<string, string>> {
  if (tablets.length === 0) return new Map();
  const rows = await reader
    .selectFrom('device')
    .select(['id', 'name'])
    .where('state', '=', 'lost')
    .where('id', 'in', tablets)
    .execute();
  return new Map(rows.map(({ id, name }) => [id, name]));
}

/** The open jobs in which a tablet recorded anything, or had something refused. */
async function listOpenJobsOf(trx: Trx, tablet: string): Promise<string[]> {
  const rows = await trx
    .selectFrom('job')
    .select('id')
    .where('state', 'in', ['open', 'parked'])
    .where((eb) =>
      eb(
        'id',
        'in',
        eb
          .selectFrom('job_entry')
          .select('job_id')
          .where('device_id', '=', tablet)
          .union(
            eb
              .selectFrom('refused_entry')
              .select((refused) => refused.fn.coalesce('job_id', refused.val('')).as('job_id'))
              .where('device_id', '=', tablet),
          ),
      ),
    )
    .orderBy('id')
    .execute();
  return rows.map(({ id }) => id);
}

/** Lost before, from the same number on, and nobody has disposed of that yet: it need not be said twice. */
function isTold({ state, heard }: JobFold, tablet: string): boolean {
  const from = (heard.get(tablet) ?? UNHEARD).number + 1;
  return state.unstepped.some(
    ({ id, kind, data }) =>
      kind === 'tablet-lost' &&
      'tablet' in data &&
      data.tablet === tablet &&
      'from' in data &&
      data.from === from &&
      state.deviations.some((one) => one.id.startsWith(`${id}:`) && one.disposed === undefined),
  );
}
