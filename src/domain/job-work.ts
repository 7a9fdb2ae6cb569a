/*
 * Who is working on a tablet is a claim. So everybody signs for their own entries from time to time: "these 63
 * entries are my work". Which of them are signed follows from how far each such signature reaches on each tablet.
 */
import type { Sha256 } from './canonical';
import type { EntryKind, EntryOf } from './entry';
import { evidenceDigest } from './job-evidence';
import type { JobState, Kept, Verdict } from './job-state';
import { findStep } from './plan';

/** Kinds that are no work: said of the job as a whole, looked at, signed, judged, or the server's own. */
const notWork: ReadonlySet<EntryKind> = new Set<EntryKind>([
  'opened',
  'took-over',
  'tool-taken',
  'photographed',
  'signed',
  'witnessed',
  'work-signed',
  'countersigned',
  'deviation-raised',
  'deviation-disposed',
  'revoked',
  'plan-moved',
  'extra-work',
  'ended-unfinished',
  'handed-over',
  'refused',
  'tablet-lost',
  'restored',
  'erased',
]);

/** An entry that its author has not yet signed as their own work. */
export function isUnsignedWork(state: JobState, { kind, by, device, deviceSeq }: Kept): boolean {
  return !notWork.has(kind) && deviceSeq > reachOf(state, by, device);
}

/** How far a person has signed their work on a tablet. */
function reachOf({ workSigned = {} }: JobState, by: string, device: string): number {
  const reach = Object.hasOwn(workSigned, by) ? workSigned[by] : undefined;
  return reach && Object.hasOwn(reach, device) ? (reach[device] ?? 0) : 0;
}

/** What a person recorded on a job and has not signed as their work. */
export function unsignedWork(state: JobState, by: string): Kept[] {
  const isOwn = (kept: Kept): boolean => kept.by === by && isUnsignedWork(state, kept);
  return [...Object.values(state.steps).flatMap(({ entries }) => entries), ...state.unstepped].filter(isOwn);
}

/** "These 63 entries are my work", for the count that is shown. */
export function myWorkWords(count: number): string {
  return count === 1 ? 'This 1 entry is my work' : `These ${count} entries are my work`;
}

/** Whose unsigned work, and how much of it; undefined where there is none. */
export function unsignedWords(name: string, count: number): string {
  return `${name} has not signed ${count === 1 ? '1 entry' : `${count} entries`} as their own work.`;
}

/** The phase whose steps are all done and in which this person has work to sign; none while it goes on. */
export function phaseToSign(state: JobState, by: string): { name: string; entries: Kept[] } | undefined {
  const entries = unsignedWork(state, by);
  if (entries.length === 0) return undefined;
  const stepsOf = new Set(entries.map(({ step }) => step));
  const phase = state.plan.phases.find(
    ({ steps }) => steps.some((id) => stepsOf.has(id)) && steps.every((id) => isBehind(state, id)),
  );
  return phase && { name: phase.name, entries };
}

/** The handover ends a phase too, and whoever worked in it signs before. */
function isBehind(state: JobState, stepId: string): boolean {
  const step = findStep(state.plan, stepId);
  if (!step || step.onDemand === true || step.kind === 'witness' || step.kind === 'hand-over') return true;
  const status = state.steps[stepId]?.status;
  return status === 'done' || status === 'not applicable';
}

/** What such a signature covers: its author's unsigned work up to the numbers that it names. */
function workCovered(state: JobState, { by, data }: EntryOf<'work-signed'>): Kept[] {
  const { upTo } = data.covers;
  return unsignedWork(state, by).filter(
    ({ device, deviceSeq }) => Object.hasOwn(upTo, device) && deviceSeq <= (upTo[device] ?? 0),
  );
}

/** A signature for one's own work is for exactly the entries whose content hashes make its digest. */
export function whyNotDigest(
  state: JobState,
  entry: EntryOf<'work-signed'>,
  { hashes, sha256 }: { hashes: ReadonlyMap<string, string>; sha256: Sha256 },
): Verdict {
  const covered = workCovered(state, entry).flatMap(({ id }) => hashes.get(id) ?? []);
  return evidenceDigest(covered, sha256) === entry.data.covers.digest
    ? { ok: true }
    : {
        ok: false,
        code: 'digest-differs',
        why: 'What it was signed for is not what you recorded: the digest on it is of other entries.',
        unlock: 'Look at your entries again and sign.',
      };
}

/** Everybody signs for their own entries, alone, and for no more than they have recorded. */
export function whyNotWorkSigned(state: JobState, entry: EntryOf<'work-signed'>): Verdict {
  const { upTo, count } = entry.data.covers;
  if (entry.with.length > 0)
    return { ok: false, code: 'alone', why: 'Everybody signs for their own work alone.' };
  const all = [...Object.values(state.steps).flatMap(({ entries }) => entries), ...state.unstepped];
  const own = all.filter(({ by }) => by === entry.by);
  const isKnown = ([device, number]: [string, number]): boolean =>
    own.some((kept) => kept.device === device && kept.deviceSeq >= number);
  if (!Object.entries(upTo).every(isKnown)) {
    return {
      ok: false,
      code: 'work-to-come',
      why: 'Nobody signs for entries that they have not made yet.',
      unlock: 'Sign for what is there.',
    };
  }
  const covered = workCovered(state, entry);
  if (covered.length === 0)
    return { ok: false, code: 'nothing-to-sign', why: 'There is no work that you have not signed already.' };
  return covered.length === count
    ? { ok: true }
    : {
        ok: false,
        code: 'count-differs',
        why: `You have ${covered.length} entries to sign for, not ${count}.`,
        unlock: 'Look at the number again and sign.',
      };
}

/** The state once a person has signed for their work. */
export function signWork(state: JobState, entry: EntryOf<'work-signed'>): JobState {
  const { workSigned = {} } = state;
  const before = Object.hasOwn(workSigned, entry.by) ? (workSigned[entry.by] ?? {}) : {};
  const reach = new Map(Object.entries(before));
  for (const [device, number] of Object.entries(entry.data.covers.upTo))
    reach.set(device, Math.max(reach.get(device) ?? 0, number));
  const signed = new Map(Object.entries(workSigned)).set(entry.by, Object.fromEntries(reach));
  return { ...state, workSigned: Object.fromEntries(signed) };
}
