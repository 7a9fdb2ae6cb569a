import { whyNotAuthorisedFor } from '@/domain/authorisation';
import { type Entry, judgementKinds, officeKinds } from '@/domain/entry';
import { mayRecord } from '@/domain/job';
import type { Verdict } from '@/domain/job-state';
import { clockTime } from '@/domain/time-words';
import { MINUTE } from './clock';
import { conflictWords } from './conflict-words';
import { hadPlan, isBehind, type JobFold, SERVER_DEVICE } from './job-fold';
import { whyWaitForKey } from './lost-keys';
import { whyWaitForPhotographs } from './photos-missing';
import { whyLost, whyNotCovered, whyNotWork, whyWaitForEvidence } from './signing';
import { type Batch, foldOf, type ProvedItem, record, refuse } from './sync-batch';
import { isRevoked, isTrueToWorkshop, proveAuthor } from './sync-author';
import type { EntryVerdict } from './sync-body';
import { placeOf } from './sync-numbers';
import type { ReadItem } from './sync-read';
import { isActOnLostView, lostFrom, whyWaitForWorkshop } from './sync-restored';
import { noteAct, tabletView, UNFORESEEN } from './tablet-view';

/** A tablet's clock may be so far off before its people are told. */
export const CLOCK_TOLERANCE_MS = 5 * MINUTE;

/** An entry that passed everything but its PIN, which is tried outside any transaction. */
export interface NeedsPin {
  needsPin: ProvedItem;
}

/** The verdict on one pushed entry; what is to be kept of it is in the batch when this returns. */
export async function judgeItem(batch: Batch, item: ReadItem): Promise<EntryVerdict | NeedsPin> {
  const final = finalVerdict(batch, item);
  if (final !== undefined) return final;
  const ownDevice = item.device !== null && item.device === batch.device?.id ? item.device : undefined;
  if (!item.read.ok) {
    if (item.read.newer) {
      return waiting(
        item,
        'server-older',
        'This record is of a newer kind than the server knows. It waits on the tablet until the server is updated.',
      );
    }
    return refuse(batch, item, {
      code: 'malformed',
      reason: `It could not be read: ${item.read.why}`,
      device: ownDevice,
    });
  }
  const { entry, fields } = item.read;
  if (batch.recorded.has(entry.id) || batch.refused.has(entry.id)) {
    const reason =
      'Another record came under the same id before. Both are kept; record it again if it is missing.';
    return refuse(batch, item, { code: 'id-taken', reason, device: ownDevice });
  }
  const fold = await foldOf(batch, entry.job);
  if (fold === undefined && batch.history.restoredAt !== null) {
    return waiting(
      item,
      'job-lost',
      'The server was restored from a backup, and does not hold this job: it may be older than the job. Its records stay on the tablet, and go in if a newer backup is restored. To work on meanwhile a supervisor opens the job again at a desk.',
    );
  }
  if (fold === undefined) {
    return waiting(
      item,
      'job-unknown',
      'The server does not hold this job yet. Its records stay on the tablet and are sent again.',
    );
  }
  if (entry.device === SERVER_DEVICE || isOneOf(officeKinds, entry.kind)) {
    return refuse(batch, item, {
      code: 'office-kind',
      reason: 'Only the server makes this kind of entry.',
      device: ownDevice,
    });
  }
  const place = await placeOf(batch, fold, entry);
  if (place.kind === 'waiting') {
    return waiting(
      item,
      'earlier-missing',
      `Record ${place.for} of this tablet has not come yet. It goes first.`,
    );
  }
  const proof = proveAuthor(batch, item, entry);
  if (!proof.ok) {
    const wait = proof.code === 'key-unknown' ? await whyWaitForKey(batch, fold, entry) : undefined;
    if (wait !== undefined) return waiting(item, wait.code, wait.why);
    return refuse(batch, item, { ...proof, device: ownDevice });
  }
  const { signature, key } = proof;
  const proved = {
    ...{ ...item, entry, fields, signature, key },
    isNumberReused: place.kind === 'reused',
    isLate: place.kind === 'late',
  };
  const told = item.carried?.refused;
  return told === undefined
    ? judgeProved(batch, fold, proved)
    : setAside(batch, proved, 'told-before', toldBefore(told.reason));
}

/**
 * A restore took the refusal back, and a verdict is final: it is given again, and says on whose word. The tablet had
 * heard of it, so it is no part of what the tablet saw afterwards; that is why it has a code of its own.
 */
function toldBefore(reason: string): string {
  return reason.startsWith(TOLD_BEFORE) ? reason : `${TOLD_BEFORE} ${reason}`;
}

const TOLD_BEFORE = 'Its tablet was told before the server was restored:';

/** A verdict is final for an id: the same entry gets the same answer however often it comes. */
function finalVerdict(batch: Batch, item: ReadItem): EntryVerdict | undefined {
  if (item.id === null) return undefined;
  const known = batch.recorded.get(item.id);
  if (known?.contentHash === item.contentHash) {
    return { id: item.id, verdict: 'already recorded', seq: known.seq, hash: known.hash };
  }
  const refused = batch.refused.get(item.id)?.find((one) => one.contentHash === item.contentHash);
  if (refused === undefined) return undefined;
  return { id: item.id, verdict: 'refused', code: refused.code, reason: refused.reason };
}

async function judgeProved(batch: Batch, fold: JobFold, item: ProvedItem): Promise<EntryVerdict | NeedsPin> {
  const { entry } = item;
  const refuseIt = (code: string, reason: string) => setAside(batch, item, code, reason);
  if (!(await hadPlan(batch.trx, fold, entry.plan))) {
    return refuseIt('plan-unknown', 'It was made under a plan that this job never had.');
  }
  if (entry.workshop > batch.history.seq) {
    return refuseIt('workshop-unknown', 'It names an entry of the workshop that was never there.');
  }
  if (entry.kind === 'plan-moved' && !(await isPlanKept(batch, entry.data.to))) {
    return refuseIt('plan-unknown', 'The plan that the job is to move to is not known.');
  }
  const wait = await whyWaitForEvidence(batch, fold, entry);
  if (wait !== undefined) return waiting(item, 'evidence-missing', wait);
  const lost = entry.kind === 'work-signed' ? await whyLost(batch, fold, entry) : undefined;
  if (lost !== undefined) return refuseIt('evidence-lost', lost);
  const { own, times } = await bestVerdict(batch, fold, item);
  const isOnLostView = !own.ok && isActOnLostView(batch, fold, item, own.code);
  if (!own.ok && !isOnLostView) {
    const why = whyWaitForWorkshop(batch, item, own);
    return why === undefined ? refuseIt(own.code, own.why) : waiting(item, 'workshop-lost', why);
  }
  const here = own.ok ? serverVerdict(batch, fold, item, times) : own;
  const isJudgement = isOneOf(judgementKinds, entry.kind);
  if (!here.ok && isJudgement) {
    return refuseIt('overtaken', `It was in order on the tablet, but not any more: ${here.why}`);
  }
  if (entry.kind === 'signed') {
    const uncovered = await whyNotCovered(batch, fold, entry);
    if (uncovered !== undefined) return refuseIt('evidence-changed', uncovered);
  }
  const noPhotographs = await whyWaitForPhotographs(batch, fold, entry);
  if (noPhotographs !== undefined) return waiting(item, 'photograph-missing', noPhotographs);
  const pin = checkedPin(batch, item);
  if ('needsPin' in pin) return pin;
  if ('code' in pin) {
    return pin.code === 'pin-locked' ? waiting(item, pin.code, pin.reason) : refuseIt(pin.code, pin.reason);
  }
  const conflict = here.ok
    ? undefined
    : { code: here.code, why: await conflictWords(batch, fold, entry, here) };
  return keep(batch, fold, item, { pin: pin.pin, conflict });
}

function keep(
  batch: Batch,
  fold: JobFold,
  item: ProvedItem,
  extra: Pick<Parameters<typeof record>[3], 'pin' | 'conflict'>,
): EntryVerdict {
  const { entry, fields, contentHash, signature, key } = item;
  const { clockOffsetMs } = batch;
  const recorded = record(
    batch,
    fold,
    { entry, fields, contentHash, signature, key: key.id },
    { ...extra, clockOffsetMs },
  );
  noteAct(batch, entry);
  countToolUse(batch, entry);
  const hash = batch.recorded.get(entry.id)?.hash;
  return {
    id: entry.id,
    verdict: 'recorded',
    seq: recorded.seq,
    ...(hash === undefined ? {} : { hash }),
    ...(recorded.conflict === undefined
      ? {}
      : { code: recorded.conflict.code, reason: recorded.conflict.why }),
  };
}

async function isPlanKept(batch: Batch, hash: string): Promise<boolean> {
  const row = await batch.trx.selectFrom('plan').select('hash').where('hash', '=', hash).executeTakeFirst();
  return row !== undefined;
}

async function setAside(batch: Batch, item: ProvedItem, code: string, reason: string): Promise<EntryVerdict> {
  const verdict = await refuse(batch, item, { code, reason, device: item.entry.device });
  if (isOneOf(UNFORESEEN, code)) noteAct(batch, item.entry);
  return verdict;
}

/** The workshop's numbers that an entry is judged by: what its tablet knew, and what held when it was made. */
interface Times {
  known: number;
  held: number;
}

function timesOf(batch: Batch, { entry, key }: ProvedItem): Times {
  const { seq } = batch.history;
  // What was made by the newest the workshop has is judged by that, whenever it was made.
  if (entry.workshop >= seq) return { known: seq, held: seq };
  const times = { known: entry.workshop, held: seq };
  // Nothing that an entry is judged by has changed since, so it need not be asked when it was made.
  if (key.revokedAt === null && isSameWorkshop(batch, times)) return { ...times, held: entry.workshop };
  const at = serverTime(batch, entry);
  return { known: entry.workshop, held: Math.max(entry.workshop, batch.history.seqAt(at)) };
}

/**
 * Was it in order on its own tablet, and by which workshop is it judged? Where a restore took back what its number
 * meant there, the workshop before that and the newest count as well: one of them is what the tablet saw, or as good.
 */
async function bestVerdict(
  batch: Batch,
  fold: JobFold,
  item: ProvedItem,
): Promise<{ own: Verdict; times: Times }> {
  const times = timesOf(batch, item);
  const own = await ownVerdict(batch, fold, item, times);
  const from = own.ok ? undefined : lostFrom(batch, item);
  if (from === undefined) return { own, times };
  const { history } = batch;
  const { seq } = history;
  const before = { known: from - 1, held: Math.max(from - 1, history.seqAt(serverTime(batch, item.entry))) };
  for (const others of [before, { known: seq, held: seq }]) {
    const verdict = await ownVerdict(batch, fold, item, others);
    if (verdict.ok) return { own: verdict, times: others };
  }
  return { own, times };
}

/** When an entry was made by the server's clock. */
function serverTime(batch: Batch, entry: Entry): string {
  const made = Math.min(Date.parse(entry.at) - batch.clockOffsetMs, Date.parse(batch.receivedAt));
  return new Date(made).toISOString();
}

/** Was it in order on its own tablet, by what that tablet knew? */
async function ownVerdict(batch: Batch, fold: JobFold, item: ProvedItem, times: Times): Promise<Verdict> {
  const { entry } = item;
  const workshop = batch.history.at(times.known);
  if (isRevoked(batch, item.key, times.known)) {
    return no('key-revoked', "The author's key had been revoked before this was made.");
  }
  if (!isTrueToWorkshop(entry, workshop) && !isTrueToWorkshop(entry, batch.history.at(times.held))) {
    return no(
      'author-differs',
      'The name, the roles or the tool written on it are not those that the workshop had.',
    );
  }
  const isOther = item.isNumberReused || item.isLate || isBehind(fold, entry.device, entry.basis);
  const view = isOther ? await tabletView(batch, fold, entry) : fold.state;
  const verdict = mayRecord(view, entry, workshop);
  if (entry.kind !== 'work-signed' || (!verdict.ok && verdict.code !== 'work-to-come')) return verdict;
  return whyNotWork(batch, fold, entry, view);
}

/** Is it in order by all that the server knows? */
function serverVerdict(batch: Batch, fold: JobFold, item: ProvedItem, times: Times): Verdict {
  const { entry } = item;
  if (item.isNumberReused) {
    return no(
      'number-used-twice',
      'This tablet used the same number for another record: it was copied or restored. Enrol it anew.',
    );
  }
  if (item.isLate)
    return no('late', 'Its tablet was declared lost, and later records of it were taken before this came.');
  if (isRevoked(batch, item.key, times.held))
    return no('key-revoked', "The author's key was revoked meanwhile.");
  const workshop = batch.history.at(times.held);
  const person = workshop.people.find(({ id }) => id === entry.by);
  if (person !== undefined) {
    // An authorisation ends on a day, and a tablet's clock may stand on another one.
    const dated = { ...entry, at: serverTime(batch, entry) };
    const authorised = whyNotAuthorisedFor(fold.state, dated, person, workshop.zone);
    if (!authorised.ok) return authorised;
  }
  const isSameView = !isBehind(fold, entry.device, entry.basis) && isSameWorkshop(batch, times);
  const isClockOff = Math.abs(batch.clockOffsetMs) > CLOCK_TOLERANCE_MS && entry.kind === 'tightened';
  // Judged in order a moment ago, and here everything is the same.
  if (isSameView && !isClockOff) return { ok: true };
  return mayRecord(fold.state, isClockOff ? { ...entry, at: serverTime(batch, entry) } : entry, workshop);
}

function isSameWorkshop(batch: Batch, times: Times): boolean {
  if (times.known === times.held) return true;
  const known = batch.history.at(times.known);
  const held = batch.history.at(times.held);
  return known.people === held.people && known.tools === held.tools && known.zone === held.zone;
}

type PinVerdict =
  | NeedsPin
  | { pin: { keyId: string; checkedAt: string } | undefined }
  | { code: 'pin-missing' | 'pin-wrong' | 'pin-unreadable' | 'pin-none-set' | 'pin-locked'; reason: string };

/** What the sealed PIN comes to, for the kinds that carry one. */
function checkedPin(batch: Batch, item: ProvedItem): PinVerdict {
  const { entry } = item;
  if (entry.kind !== 'signed' && entry.kind !== 'countersigned' && entry.kind !== 'took-over')
    return { pin: undefined };
  if (item.carried?.sealed === undefined) {
    if (entry.kind === 'took-over') return { pin: undefined };
    return { code: 'pin-missing', reason: 'It came without a PIN. Sign again, with the PIN.' };
  }
  const tried = batch.pins.get(item.contentHash);
  switch (tried?.result) {
    case undefined:
      return { needsPin: item };
    case 'right':
      return { pin: { keyId: tried.keyId, checkedAt: tried.checkedAt } };
    case 'wrong':
      return { code: 'pin-wrong', reason: 'The PIN was wrong. Sign again.' };
    case 'unreadable':
      return {
        code: 'pin-unreadable',
        reason: 'The PIN could not be opened: it was sealed to another key or for another entry. Sign again.',
      };
    case 'none set':
      return {
        code: 'pin-none-set',
        reason: `${entry.author.name} has no PIN yet. Set one under "My account", then sign again.`,
      };
    case 'locked':
      return {
        code: 'pin-locked',
        reason: `Too many wrong PINs: ${entry.author.name}'s PIN is locked until ${clockTime(tried.until, batch.history.at(batch.history.seq).zone)}. The record waits and goes in by itself.`,
      };
  }
}

function countToolUse(batch: Batch, entry: Entry): void {
  if (entry.kind !== 'tightened' || entry.data.tool === undefined) return;
  const { id } = entry.data.tool;
  batch.toolUses.set(id, (batch.toolUses.get(id) ?? 0) + 1);
}

function waiting(item: ReadItem, code: string, reason: string): EntryVerdict {
  return { id: item.id ?? '', verdict: 'waiting', code, reason };
}

function no(code: string, why: string): Verdict {
  return { ok: false, code, why };
}

function isOneOf(list: readonly string[], value: string): boolean {
  return list.includes(value);
}
