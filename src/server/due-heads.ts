import { findStep } from '@/domain/plan';
import type { Recorded } from '@/domain/entry';
import { parseKnownRoles } from './actor';
import type { App } from './compose';
import type { Db, Trx } from './database';
import { queueHeadMail } from './head-mail';
import { getPlan } from './plans';
import { signHeadAt } from './signed-heads';

/*
 * A head is due at every class A hold point that is signed, and at handover. It is signed once the entry is on
 * disk: a key that cannot sign never costs an entry. What is due is read from the tables, so that a head that
 * failed, or that a power cut swallowed, is made good at the job's next push or the next start.
 */

interface Due {
  job: string;
  seq: number;
  hash: string;
  recorded: Recorded;
}

/** Signs the heads that are due in these jobs, or in all; one that fails is logged and stays due. */
export async function signDueHeads(app: App, jobs?: readonly string[]): Promise<void> {
  if (jobs?.length === 0) return;
  for (const due of await findDue(app.db, jobs)) {
    try {
      await app.db.transaction().execute((trx) => signDue(trx, due, app));
    } catch (error) {
      app.log.error(
        { err: error, job: due.job, seq: due.seq },
        'The head of a trail could not be signed. It is tried again at the next push of the job and at the next start.',
      );
    }
  }
}

async function signDue(trx: Trx, { job, seq, hash, recorded }: Due, app: App): Promise<void> {
  const { by, author } = recorded;
  const roles = parseKnownRoles(author.roles);
  const signer = { personId: by, name: author.name, roles, sessionId: undefined };
  const head = await signHeadAt(trx, signer, { trail: job, seq, hash }, app);
  await queueHeadMail(trx, { head, job, ...(await milestoneOf(trx, recorded)) }, app);
}

/** Signatures and handovers past the last signed head of their job. */
async function findDue(db: Db, jobs: readonly string[] | undefined): Promise<Due[]> {
  let query = db
    .selectFrom('job_entry')
    .select(['job_id as job', 'seq', 'hash', 'body'])
    .where('kind', 'in', ['signed', 'handed-over'])
    .where((eb) =>
      eb(
        'seq',
        '>',
        eb.fn.coalesce(
          eb
            .selectFrom('signed_head')
            .select((head) => head.fn.max('signed_head.seq').as('seq'))
            .whereRef('signed_head.trail', '=', 'job_entry.job_id'),
          eb.lit(0),
        ),
      ),
    )
    .orderBy('job_id')
    .orderBy('seq');
  if (jobs !== undefined) query = query.where('job_id', 'in', jobs);
  const due: Due[] = [];
  for (const { body, ...place } of await query.execute()) {
    const recorded = JSON.parse(body) as Recorded;
    if (await isMilestone(db, recorded)) due.push({ ...place, recorded });
  }
  return due;
}

async function isMilestone(db: Db, { kind, plan, step }: Recorded): Promise<boolean> {
  if (kind === 'handed-over') return true;
  return step !== undefined && findStep(await getPlan(db, plan), step)?.class === 'A';
}

async function milestoneOf(
  db: Db,
  { kind, plan, step }: Recorded,
): Promise<{ reached: string; isHandover: boolean }> {
  if (kind === 'handed-over') return { reached: 'the handover', isHandover: true };
  const title = step === undefined ? undefined : findStep(await getPlan(db, plan), step)?.title;
  const words = title === undefined ? 'a hold point' : `${title.charAt(0).toLowerCase()}${title.slice(1)}`;
  return { reached: words, isHandover: false };
}
