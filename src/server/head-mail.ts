import { headCode } from '@/domain/head-code';
import type { SignedHead } from '@/domain/trail-export';
import { dayAndTime } from '@/domain/time-words';
import { type Actor, requireRole } from './actor';
import { type Clock, type Ids, stamp } from './clock';
import type { Db, Trx } from './database';
import { AppError } from './errors';
import { queueMail } from './mail-queue';
import { getWorkshopDetails } from './workshop';
import { appendWorkshopEntry } from './workshop-trail';

/*
 * Signed heads leave the house: whoever holds one can find out later whether the trail was cut short or written
 * anew. They go to the witness address that the owner chose, and at handover to the customer.
 */

const WITNESS = 'workshop.witness-address';
const MAILED_AT = 'heads.mailed-at';

/** The address that heads are sent to; undefined while the owner has chosen none. */
export async function findWitnessAddress(db: Db, actor: Actor): Promise<string | undefined> {
  requireRole(actor, 'owner');
  return readWitnessAddress(db);
}

async function readWitnessAddress(db: Db): Promise<string | undefined> {
  const row = await db.selectFrom('setting').select('value').where('key', '=', WITNESS).executeTakeFirst();
  return row?.value;
}

/** Chooses where heads are sent, or nowhere. The trail tells that it changed, and not to whom: it can't forget. */
export async function setWitnessAddress(
  trx: Trx,
  actor: Actor,
  address: string | null,
  app: Making,
): Promise<void> {
  requireRole(actor, 'owner');
  await trx.deleteFrom('setting').where('key', '=', WITNESS).execute();
  if (address !== null) await trx.insertInto('setting').values({ key: WITNESS, value: address }).execute();
  const data = { address: address === null ? 'removed' : 'set' };
  await appendWorkshopEntry(trx, actor, { kind: 'witness-address-changed', data }, app);
}

/** Queues a letter that says nothing but that letters arrive. */
export async function sendTrialLetter(trx: Trx, actor: Actor, app: Making): Promise<void> {
  const address = await findWitnessAddress(trx, actor);
  if (address === undefined)
    throw new AppError('not-allowed', 'There is no witness address yet. Choose one, then try it.');
  const { name } = await getWorkshopDetails(trx);
  const subject = `${name}: a trial letter`;
  const body = `Signed heads of ${name} will come to this address. Keep every letter: with it you can find out later whether a trail was cut short or written anew.\n`;
  await queueMail(trx, { purpose: 'trial', job: null, address, subject, body }, app);
}

interface HeadOfJob {
  head: SignedHead;
  job: string;
  /** What was reached, as "hold point: caps marked". */
  reached: string;
  isHandover: boolean;
}

interface Making {
  clock: Clock;
  ids: Ids;
}

/** Queues the letters that a head of a job causes: to the witness, and at handover to the customer. */
export async function queueHeadMail(trx: Trx, reached: HeadOfJob, app: Making): Promise<void> {
  const { name, zone } = await getWorkshopDetails(trx);
  const { number } = await trx
    .selectFrom('job')
    .select('number')
    .where('id', '=', reached.job)
    .executeTakeFirstOrThrow();
  const at = dayAndTime(reached.head.at, zone);
  const subject = `${name}: job ${number}, ${reached.reached}`;
  const witness = await readWitnessAddress(trx);
  if (witness !== undefined) {
    const body = `${name} recorded ${reached.reached} of job ${number} (${at}).\n\n${keepWords([reached.head])}`;
    const mail = { purpose: 'head to witness', job: reached.job, address: witness, subject, body } as const;
    await queueMail(trx, mail, app);
  }
  const customer = reached.isHandover ? await findCustomerAddress(trx, reached.job) : undefined;
  if (customer !== undefined) {
    const body = handoverWords({ name, number, at, code: headCode(reached.head) });
    const mail = {
      purpose: 'handover to customer',
      job: reached.job,
      address: customer,
      subject,
      body,
    } as const;
    await queueMail(trx, mail, app);
  }
}

async function findCustomerAddress(db: Db, job: string): Promise<string | undefined> {
  const row = await db
    .selectFrom('job_identity')
    .select('value')
    .where('job_id', '=', job)
    .where('field', '=', 'customerEmail')
    .executeTakeFirst();
  return row?.value ?? undefined;
}

function handoverWords(said: { name: string; number: string; at: string; code: string }): string {
  return [
    `The work on your vehicle (job ${said.number}) was handed over on ${said.at}.`,
    `The line below stands for everything that ${said.name} has on record of it. Keep it: with it anybody can find out later whether that record was changed or cut short.`,
    said.code,
    'It tells nobody who you are or which vehicle it was.',
    '',
  ].join('\n\n');
}

/** Queues one letter with the heads that were signed since the letter of the day before. */
export async function queueDayMail(trx: Trx, app: Making): Promise<void> {
  const { value: since } = (await trx
    .selectFrom('setting')
    .select('value')
    .where('key', '=', MAILED_AT)
    .executeTakeFirst()) ?? { value: '' };
  const value = stamp(app.clock);
  await trx
    .insertInto('setting')
    .values({ key: MAILED_AT, value })
    .onConflict((conflict) => conflict.column('key').doUpdateSet({ value }))
    .execute();
  const address = await readWitnessAddress(trx);
  const heads = await trx
    .selectFrom('signed_head')
    .selectAll()
    .where('at', '>', since)
    .where('at', '<=', value)
    .orderBy('trail')
    .orderBy('seq')
    .execute();
  if (address === undefined || heads.length === 0) return;
  const { name } = await getWorkshopDetails(trx);
  const subject = `${name}: ${heads.length} signed ${heads.length === 1 ? 'head' : 'heads'} of the day`;
  const mail = { purpose: 'heads of the day', job: null, address, subject } as const;
  await queueMail(trx, { ...mail, body: keepWords(heads) }, app);
}

function keepWords(heads: readonly SignedHead[]): string {
  return `Keep this letter. Each line is the signed head of a trail: whoever holds it can find out later whether the trail was cut short or written anew, with "npm run verify-trail -- FILE --head HASH", the hash being the fifth word.\n\n${heads.map(headCode).join('\n\n')}\n`;
}
