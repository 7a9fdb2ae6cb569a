import { parseEntry } from '@/domain/entry';
import { wordsOf } from '@/domain/entry-words';
import type { Plan } from '@/domain/plan';
import type { Actor } from './actor';
import { LIST_PAGE, pageOf, readCursor } from './cursor';
import type { Db } from './database';
import { getVisibleJob, seesAllJobs } from './job-access';
import { getFold } from './job-fold';

/** An entry that was refused and is kept whole, as people read of it. */
export interface SetAside {
  id: string;
  /** What it says, in words. */
  words: string;
  code: string;
  reason: string;
  /** When it was set aside. */
  at: string;
  /** When it was made, by the clock of its tablet; none if it could not be read. */
  madeAt?: string | undefined;
  /** Who it says that it is by. */
  by?: string | undefined;
  /** The tablet that it is proved to have come from. */
  tablet?: string | undefined;
}

/** What was set aside in a job, the newest first; those who don't see all read only what is in their own name. */
export async function listSetAside(
  db: Db,
  actor: Actor,
  job: string,
  { cursor }: { cursor?: string | undefined },
): Promise<{ setAside: SetAside[]; cursor?: string }> {
  await getVisibleJob(db, actor, job);
  let query = db
    .selectFrom('refused_entry')
    .leftJoin('device', 'device.id', 'refused_entry.device_id')
    .leftJoin('person', 'person.id', 'refused_entry.by_person')
    .select(['refused_entry.id', 'code', 'message', 'body', 'at', 'device.name', 'printed_name'])
    .where('job_id', '=', job)
    .orderBy('at', 'desc')
    .orderBy('refused_entry.id', 'desc')
    .limit(LIST_PAGE + 1);
  if (!seesAllJobs(actor)) query = query.where('by_person', '=', actor.personId);
  const after = readCursor(cursor, 2);
  if (after !== undefined)
    query = query.where((eb) => eb(eb.refTuple('at', 'refused_entry.id'), '<', eb.tuple(...after)));
  const { rows, ...next } = pageOf(await query.execute(), LIST_PAGE, ({ at, id }) => [at, id]);
  const { plan } = (await getFold(db, job)).state;
  const setAside = rows.map(({ id, code, message, body, at, name, printed_name }) => ({
    ...{ id, code, reason: message, at, ...readBody(body, plan) },
    ...(printed_name === null ? {} : { by: printed_name }),
    ...(name === null ? {} : { tablet: name }),
  }));
  return { setAside, ...next };
}

/** What came was kept whatever it was, so it may be no entry at all. */
function readBody(body: string, plan: Plan): Pick<SetAside, 'words' | 'madeAt'> {
  const parsed = parseEntry((JSON.parse(body) as { entry?: unknown }).entry);
  if (!parsed.ok) return { words: 'Something that could not be read' };
  return { words: wordsOf(parsed.entry, plan), madeAt: parsed.entry.at };
}
