import type { Entry, Recorded } from '@/domain/entry';
import { wordsOf } from '@/domain/entry-words';
import type { Kept } from '@/domain/job-state';
import type { Db } from './database';
import { type JobFold, SERVER_DEVICE } from './job-fold';
import type { Batch } from './sync-batch';

/*
 * Why a record is in conflict, as it enters the trail and is read everywhere: who did what on which tablet, and
 * what they could not know. It is written once, so it names people and tablets as they were called then.
 */

/** The conflict of an entry in words, from the rule that it met. */
export async function conflictWords(
  batch: Batch,
  fold: JobFold,
  entry: Entry,
  { code, why }: { code: string; why: string },
): Promise<string> {
  const others = unheardOf(fold, entry);
  const same = await readOther(batch, sameNumber(fold, entry, code) ?? onSameStep(others, entry));
  const moved = await readOther(batch, code === 'unknown-step' ? movedBy(fold, entry) : undefined);
  const tablets = await readTabletNames(batch.trx, [entry, ...others, ...(same ? [same] : [])]);
  const said = (one: Entry) => `“${wordsOf(one, fold.plans.get(one.plan) ?? fold.state.plan)}”`;
  const by = (one: Entry) => `${one.author.name} on ${nameOf(tablets, one.device)}`;
  if (code === 'late')
    return `${said(entry)} by ${by(entry)} came late: the tablet was declared lost, and later records of it were taken before. It is kept: look whether it was really done, and whether it still holds.`;
  if (code === 'number-used-twice') {
    const first = same === undefined ? 'another record' : `${said(same)} by ${same.author.name}`;
    return `${nameOf(tablets, entry.device)} used its number ${entry.deviceSeq} twice: for ${first} and for ${said(entry)} by ${entry.author.name}. The tablet was copied, or its browser was put back to an earlier state. Both records are kept. Enrol the tablet anew before anybody goes on with it.`;
  }
  if (moved !== undefined)
    return `${by(entry)} recorded ${said(entry)} by the plan that their tablet had, without having heard that ${moved.author.name} had moved the job to a newer one, which does not have this step. It happened, and it is kept.`;
  if (same !== undefined) {
    const both = isAtBolt(entry) ? 'Both were done, and the bolt counts both.' : 'Both are kept.';
    return said(same) === said(entry)
      ? `Two tablets recorded ${said(entry)}: ${by(same)}, and ${by(entry)}, who had not heard of it. ${both}`
      : `Two tablets: ${by(same)} recorded ${said(same)}, and ${by(entry)}, who had not heard of it, ${said(entry)}. ${both}`;
  }
  if (others.length > 0)
    return `${by(entry)} recorded ${said(entry)} without having heard what ${list(whoElse(others, tablets))} had recorded meanwhile. ${why}`;
  return `${by(entry)} recorded ${said(entry)}. ${why}`;
}

/** What other tablets recorded in the job since this one last heard of it, in order. */
function unheardOf({ state }: JobFold, { device, basis }: Entry): Kept[] {
  return [...Object.values(state.steps).flatMap(({ entries }) => entries), ...state.unstepped]
    .filter((kept) => kept.device !== device && kept.device !== SERVER_DEVICE && (kept.seq ?? 0) > basis)
    .sort((one, next) => (one.seq ?? 0) - (next.seq ?? 0));
}

/** The other tablet's entry on the same step: the same act if there is one, else the last one there. */
function onSameStep(others: readonly Kept[], entry: Entry): Kept | undefined {
  if (entry.step === undefined) return undefined;
  const there = others.filter(({ step, kind }) => step === entry.step && kind !== 'photographed');
  const act = actOf(entry);
  return there.findLast((kept) => actOf(kept) === act) ?? there.at(-1);
}

/** What was done, at which bolt and in which pass. */
function actOf({ kind, data }: Pick<Entry, 'kind' | 'data'>): string {
  if (!('bolt' in data)) return kind;
  const place = 'cycle' in data ? ` ${data.cycle} ${data.stage}` : '';
  return `${kind} ${data.bolt}${place}`;
}

function isAtBolt({ kind }: Entry): boolean {
  return kind === 'tightened';
}

/** The first record under a number that came twice. */
function sameNumber({ state }: JobFold, entry: Entry, code: string): Kept | undefined {
  if (code !== 'number-used-twice') return undefined;
  return [...Object.values(state.steps).flatMap(({ entries }) => entries), ...state.unstepped].find(
    ({ device, deviceSeq }) => device === entry.device && deviceSeq === entry.deviceSeq,
  );
}

function movedBy({ state }: JobFold, { basis }: Entry): Kept | undefined {
  return state.unstepped.findLast(({ kind, seq = 0 }) => kind === 'plan-moved' && seq > basis);
}

function whoElse(others: readonly Kept[], tablets: ReadonlyMap<string, string>): string[] {
  return [...new Set(others.map(({ name, device }) => `${name} on ${nameOf(tablets, device)}`))];
}

/** "a", "a and b", "a, b and c". */
function list(words: readonly string[]): string {
  return words.length < 2 ? words.join('') : `${words.slice(0, -1).join(', ')} and ${words.at(-1) ?? ''}`;
}

/** The entry as it was recorded, in this push or before. */
async function readOther({ newEntries, trx }: Batch, kept: Kept | undefined): Promise<Recorded | undefined> {
  if (kept === undefined) return undefined;
  const row =
    newEntries.find(({ id }) => id === kept.id) ??
    (await trx.selectFrom('job_entry').select('body').where('id', '=', kept.id).executeTakeFirst());
  return row === undefined ? undefined : (JSON.parse(row.body) as Recorded);
}

async function readTabletNames(
  reader: Db,
  entries: readonly { device: string }[],
): Promise<ReadonlyMap<string, string>> {
  const ids = [...new Set(entries.map(({ device }) => device))];
  const rows = await reader.selectFrom('device').select(['id', 'name']).where('id', 'in', ids).execute();
  return new Map(rows.map(({ id, name }) => [id, name]));
}

function nameOf(tablets: ReadonlyMap<string, string>, device: string): string {
  return tablets.get(device) ?? 'a tablet that is not known here';
}
