import { type Entry, judgementKinds } from '@/domain/entry';
import type { JobFold } from './job-fold';
import type { Batch, ProvedItem } from './sync-batch';

/*
 * A restore takes back the end of a job's trail and of the workshop's, and the numbers of the workshop's are used
 * again. What was made on a tablet that saw what was lost can't be judged by what it saw. An act happened all the
 * same, and a judgement waits until the owner has put right what its author was.
 */

/** The numbers of the trail's entries that tell of a restore which this tablet met. */
export function restoresMet({ state }: JobFold, device: string): number[] {
  return state.unstepped.flatMap(({ kind, data, seq = 0 }) =>
    kind === 'restored' && 'reason' in data && data.reason?.includes(device) === true ? [seq] : [],
  );
}

/**
 * Whether a trail tells of a restore: the job's, that this tablet held what the server had lost, or the workshop's.
 * A second restore takes the job's note of the first away, so either is enough.
 */
function isRestoreTold({ history }: Batch, fold: JobFold, device: string): boolean {
  return history.restoredAt !== null || restoresMet(fold, device).length > 0;
}

/** Why something is not in order however the job stood. */
const WHATEVER_IT_SAW = ['key-revoked', 'author-differs', 'unknown-person', 'inactive-person', 'role'];

/** What the workshop's people and tools decide, and nothing else. */
const OF_AUTHOR = ['author-differs', 'inactive-person', 'role', 'authorisation-over'];
const OF_WORKSHOP = [...OF_AUTHOR, 'unknown-person', 'unknown-tool', 'tool-unfit'];

/**
 * The first number that the workshop an entry was made by may have lost to a restore; undefined if it lost none. The
 * trail must tell of that restore, at a number that is not later than the one the entry names.
 */
export function lostFrom(
  { history }: Pick<Batch, 'history'>,
  { entry, carried }: Pick<ProvedItem, 'entry' | 'carried'>,
): number | undefined {
  const known = carried?.workshopRestoredAt ?? '';
  return history.restores.find(({ seq, at }) => seq <= entry.workshop && at > known)?.seq;
}

/**
 * An act that was done after entries which a restore took back: whether its own tablet forbade it nobody can say
 * any more, and it happened. That it was is the tablet's word; that there was a restore is not.
 */
export function isActOnLostView(batch: Batch, fold: JobFold, item: ProvedItem, code: string): boolean {
  const { entry, carried } = item;
  if (batch.device === undefined || isJudgement(entry)) return false;
  if (OF_WORKSHOP.includes(code) && lostFrom(batch, item) !== undefined) return true;
  const isSaid = carried?.restored === true || batch.lostViews.has(entry.job);
  return isSaid && !WHATEVER_IT_SAW.includes(code) && isRestoreTold(batch, fold, batch.device.id);
}

/** Why a judgement waits that a restore may have taken the ground of; undefined if it need not. */
export function whyWaitForWorkshop(
  batch: Batch,
  item: ProvedItem,
  { code, why }: { code: string; why: string },
): string | undefined {
  const { entry } = item;
  const from = lostFrom(batch, item);
  if (from === undefined || !isJudgement(entry) || !OF_AUTHOR.includes(code)) return undefined;
  const { history } = batch;
  const personAt = (seq: number) => history.at(seq).people.find(({ id }) => id === entry.by);
  // Whatever was changed about the author since the restore is the owner's word on it.
  if (personAt(from) !== personAt(history.seq)) return undefined;
  const { name, roles } = entry.author;
  return `The server was restored from a backup, and what it knows of ${name} is older than this: ${why} The owner opens ${name} under People and makes it again as it was (active, ${roles.join(' and ')}); then this goes in by itself. If it is not to go in, any other change there has it refused.`;
}

function isJudgement({ kind }: Entry): boolean {
  return judgementKinds.some((judgement) => judgement === kind);
}
