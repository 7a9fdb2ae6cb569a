import { findKept } from '@/domain/job';
import type { JobState, Kept } from '@/domain/job-state';
import type { EntryKind } from '@/domain/entry';
import { doneWords } from './done-words';
import type { Run } from './run-context';
import { clockTime } from '@/domain/time-words';

/** Kinds that are said, signed or arranged: they are revoked or corrected, never taken back as an act. */
const NOT_AN_ACT = new Set<EntryKind>([
  'opened',
  'took-over',
  'tool-taken',
  'signed',
  'witnessed',
  'work-signed',
  'countersigned',
  'deviation-disposed',
  'corrected',
  'taken-back',
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

/** The last act, newest record first; one touch may have made several records. */
export function lastAct(state: JobState): Kept[] {
  const last = newestAct(state);
  if (!last) return [];
  const step = last.step === undefined ? undefined : state.steps[last.step];
  if (!step || !isBoltAct(last.kind)) return [last];
  return step.entries
    .filter(
      (kept) => kept.kind === last.kind && kept.at === last.at && kept.device === last.device && counts(kept),
    )
    .reverse();
}

function newestAct(state: JobState): Kept | undefined {
  const last = state.lastEntry === undefined ? undefined : findKept(state, state.lastEntry);
  if (last && isAct(last)) return last;
  // A tool taken or a signature since then doesn't hide the last thing that was done.
  let newest: Kept | undefined;
  for (const { entries } of Object.values(state.steps)) {
    const kept = entries.findLast(isAct);
    if (kept && (newest === undefined || kept.at > newest.at)) newest = kept;
  }
  return newest;
}

function isAct(kept: Kept): boolean {
  return !NOT_AN_ACT.has(kept.kind) && counts(kept);
}

function counts(kept: Kept): boolean {
  return kept.takenBack === undefined && kept.voided === undefined;
}

function isBoltAct(kind: EntryKind): boolean {
  return kind === 'tightened' || kind === 'released';
}

/** "Done 10:42, on this tablet: bolt 4A turned 110°". */
export function lastActWords(run: Run, acts: Kept[]): string {
  const [newest] = acts;
  if (!newest) return '';
  const { plan } = run.state;
  const place = run.whereIs(newest.id);
  return `Done ${clockTime(newest.at, run.workshop.zone)}, ${place}: ${actWords(acts, plan)}`;
}

/** The act in words; several bolts of one touch are told together. */
export function actWords(acts: Kept[], plan: JobState['plan']): string {
  const [newest, ...others] = acts;
  if (!newest) return '';
  if (others.length === 0) return doneWords(newest, plan);
  const words = doneWords(newest, plan);
  const bolt = 'bolt' in newest.data && typeof newest.data.bolt === 'string' ? newest.data.bolt : undefined;
  if (bolt === undefined) return words;
  const names = [
    ...new Set(
      acts.flatMap(({ data }) => ('bolt' in data && typeof data.bolt === 'string' ? [data.bolt] : [])),
    ),
  ].reverse();
  return words
    .replace(`bolt ${bolt}`, bolt)
    .replace(bolt, names.length === 2 ? `bolts ${names.join(' and ')}` : `${names[0]} to ${names.at(-1)}`);
}
