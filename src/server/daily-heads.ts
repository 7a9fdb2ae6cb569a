import { THE_WORKSHOP } from './actor';
import { MINUTE } from './clock';
import type { App } from './compose';
import type { Db } from './database';
import { signDueHeads } from './due-heads';
import { queueDayMail } from './head-mail';
import { signHead, WORKSHOP_TRAIL } from './signed-heads';
import { getWorkshopDetails } from './workshop';

/*
 * Once a day, in the workshop's zone, each trail that grew since its last head gets a new one; the first look on
 * a day does it for the days before, so that a night without power loses none.
 */

const SIGNED_ON = 'heads.signed-on';
const LOOK_EVERY_MS = 10 * MINUTE;

/** Signs the heads of the day unless that is done; gives how many were signed. */
export async function signDailyHeads(app: App): Promise<number> {
  const today = await dayAtWorkshop(app);
  if ((await findSignedOn(app.db)) === today) return 0;
  const jobs = await signEach(app, await listGrownJobs(app.db));
  // Last: a head of a job is told of in the workshop's trail, which grew by it.
  const own = await signEach(app, await listGrownWorkshop(app.db));
  if (jobs.failed + own.failed === 0) {
    await app.db.transaction().execute(async (trx) => {
      await queueDayMail(trx, app);
      await storeSignedOn(trx, today);
    });
  }
  return jobs.signed + own.signed;
}

async function signEach(app: App, trails: readonly string[]): Promise<{ signed: number; failed: number }> {
  let signed = 0;
  for (const trail of trails) {
    try {
      await app.db.transaction().execute((trx) => signHead(trx, THE_WORKSHOP, trail, app));
      signed += 1;
    } catch (error) {
      app.log.error(
        { err: error, trail },
        'The head of the day could not be signed. It is tried again soon.',
      );
    }
  }
  return { signed, failed: trails.length - signed };
}

/** Keeps the heads of the running server signed: what is due, at once, and each day's. Call what it gives to stop. */
export function keepHeadsSigned(app: App): () => Promise<void> {
  let running = Promise.resolve();
  const look = (work: () => Promise<unknown>) => {
    running = running.then(work).then(
      () => undefined,
      (error: unknown) => app.log.error({ err: error }, 'The heads of the trails could not be looked after'),
    );
  };
  look(() => signDueHeads(app));
  look(() => signDailyHeads(app));
  const timer = setInterval(() => look(() => signDailyHeads(app)), LOOK_EVERY_MS);
  timer.unref();
  return () => {
    clearInterval(timer);
    return running;
  };
}

async function dayAtWorkshop({ db, clock }: App): Promise<string> {
  const { zone } = await getWorkshopDetails(db);
  const parts = { timeZone: zone, year: 'numeric', month: '2-digit', day: '2-digit' } as const;
  return new Intl.DateTimeFormat('en-CA', parts).format(clock.now());
}

async function findSignedOn(db: Db): Promise<string | undefined> {
  const row = await db.selectFrom('setting').select('value').where('key', '=', SIGNED_ON).executeTakeFirst();
  return row?.value;
}

async function storeSignedOn(db: Db, value: string): Promise<void> {
  await db
    .insertInto('setting')
    .values({ key: SIGNED_ON, value })
    .onConflict((conflict) => conflict.column('key').doUpdateSet({ value }))
    .execute();
}

async function listGrownJobs(db: Db): Promise<string[]> {
  const rows = await db
    .selectFrom('job_entry')
    .leftJoin(
      (eb) =>
        eb
          .selectFrom('signed_head')
          .select(({ fn }) => ['trail', fn.max('seq').as('signed')])
          .groupBy('trail')
          .as('head'),
      (join) => join.onRef('head.trail', '=', 'job_entry.job_id'),
    )
    .select('job_id')
    .groupBy('job_id')
    .having(({ eb, fn }) => eb(fn.max('job_entry.seq'), '>', fn.coalesce('head.signed', eb.lit(0))))
    .orderBy('job_id')
    .execute();
  return rows.map(({ job_id }) => job_id);
}

async function listGrownWorkshop(db: Db): Promise<string[]> {
  const { last } = await db
    .selectFrom('workshop_entry')
    .select(({ fn }) => fn.max<number | null>('seq').as('last'))
    .executeTakeFirstOrThrow();
  const { signed } = await db
    .selectFrom('signed_head')
    .select(({ fn }) => fn.max<number | null>('seq').as('signed'))
    .where('trail', '=', WORKSHOP_TRAIL)
    .executeTakeFirstOrThrow();
  return (last ?? 0) > (signed ?? 0) ? [WORKSHOP_TRAIL] : [];
}
