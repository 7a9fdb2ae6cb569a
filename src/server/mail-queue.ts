import type { MailRow } from '@db/tables';
import { type Actor, requireRole } from './actor';
import { MINUTE, stamp, type Clock, type Ids } from './clock';
import type { App } from './compose';
import { LIST_PAGE, pageOf, readCursor } from './cursor';
import type { Db, Trx } from './database';
import type { Mailer } from './mail';

/*
 * Mail is queued in the transaction that it tells of, so that neither comes without the other, and sent after. A
 * letter that the service takes and whose answer is lost is sent again under the same id, and arrives once.
 */

/** A letter that is to be sent. */
export interface NewMail {
  purpose: MailRow['purpose'];
  job: string | null;
  address: string;
  subject: string;
  body: string;
}

/** Puts a letter into the queue. */
export async function queueMail(trx: Trx, mail: NewMail, app: { clock: Clock; ids: Ids }): Promise<void> {
  const { job, ...rest } = mail;
  const now = stamp(app.clock);
  await trx
    .insertInto('mail')
    .values({
      ...rest,
      ...{ id: app.ids.next(), job_id: job, made_at: now, next_at: now },
      ...{ state: 'waiting', attempts: 0, sent_at: null, via: null, trouble: null },
    })
    .execute();
}

const BATCH = 20;
/** The wait doubles from a minute to six hours; after two days of it a letter is given up, and says so. */
const LONGEST_WAIT_MS = 360 * MINUTE;
const MOST_ATTEMPTS = 16;

/** Sends what is due, the oldest first; gives how many left. */
export async function sendDueMail(app: App, mailer: Mailer): Promise<number> {
  const due = await app.db
    .selectFrom('mail')
    .selectAll()
    .where('state', '=', 'waiting')
    .where('next_at', '<=', stamp(app.clock))
    .orderBy('made_at')
    .orderBy('id')
    .limit(BATCH)
    .execute();
  let sent = 0;
  for (const { id, address: to, subject, body: text, attempts } of due) {
    const outcome = await mailer.send({ id, to, subject, text });
    const isSent = outcome.ok;
    if (isSent) sent += 1;
    else app.log.warn({ mail: id, attempts: attempts + 1 }, `Mail did not leave: ${outcome.words}`);
    const isGivenUp = !isSent && (outcome.isFinal || attempts + 1 >= MOST_ATTEMPTS);
    await app.db
      .updateTable('mail')
      .set({
        state: isSent ? 'sent' : isGivenUp ? 'failed' : 'waiting',
        attempts: attempts + 1,
        next_at: nextTry(app.clock, attempts),
        sent_at: isSent ? stamp(app.clock) : null,
        via: isSent ? mailer.via : null,
        trouble: isSent ? null : outcome.words,
      })
      .where('id', '=', id)
      .where('state', '=', 'waiting')
      .execute();
  }
  return sent;
}

function nextTry(clock: Clock, attempts: number): string {
  const wait = Math.min(MINUTE * 2 ** attempts, LONGEST_WAIT_MS);
  return new Date(clock.now().getTime() + wait).toISOString();
}

const LOOK_EVERY_MS = MINUTE / 4;

/** Keeps sending while the server runs. Call what it gives to stop. */
export function keepMailSent(app: App, mailer: Mailer): () => Promise<void> {
  let running = Promise.resolve();
  const look = () => {
    running = running
      .then(() => sendDueMail(app, mailer))
      .then(
        () => undefined,
        (error: unknown) => app.log.error({ err: error }, 'The mail could not be looked after'),
      );
  };
  look();
  const timer = setInterval(look, LOOK_EVERY_MS);
  timer.unref();
  return () => {
    clearInterval(timer);
    return running;
  };
}

/** A letter as the owner sees it. */
export interface MailView {
  id: string;
  purpose: MailRow['purpose'];
  job: string | null;
  address: string;
  subject: string;
  body: string;
  madeAt: string;
  state: MailRow['state'];
  sentAt: string | null;
  via: 'service' | 'here' | null;
  trouble: string | null;
}

/** Letters, the newest first, a page at a time. */
export async function listMail(
  db: Db,
  actor: Actor,
  { cursor }: { cursor?: string | undefined } = {},
): Promise<{ mail: MailView[]; cursor?: string }> {
  requireRole(actor, 'owner');
  let query = db
    .selectFrom('mail')
    .selectAll()
    .orderBy('id', 'desc')
    .limit(LIST_PAGE + 1);
  const after = readCursor(cursor, 1);
  if (after !== undefined) query = query.where('id', '<', after[0]);
  const { rows, ...next } = pageOf(await query.execute(), LIST_PAGE, ({ id }) => [id]);
  return { mail: rows.map(toView), ...next };
}

function toView(row: MailRow): MailView {
  const { id, purpose, job_id: job, address, subject, body, state, via, trouble } = row;
  const times = { madeAt: row.made_at, sentAt: row.sent_at };
  return { id, purpose, job, address, subject, body, ...times, state, via, trouble };
}
