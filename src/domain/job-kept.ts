import type { Entry, EntryData, EntryKind, Recorded } from './entry';
import type { JobState, Kept, StepState } from './job-state';
import { writable } from './job-tables';

/** Kinds that say something about another entry; they never make a step done. */
const aboutOthers = new Set<EntryKind>([
  'corrected',
  'taken-back',
  'revoked',
  'countersigned',
  'work-signed',
  'deviation-raised',
  'deviation-disposed',
  'measuring-again',
]);

/** An entry as the state remembers it. */
export function keep(entry: Entry | Recorded): Kept {
  const recorded = 'seq' in entry ? entry : undefined;
  return {
    id: entry.id,
    kind: entry.kind,
    ...(entry.step === undefined ? {} : { step: entry.step }),
    by: entry.by,
    name: entry.author.name,
    with: entry.with,
    device: entry.device,
    deviceSeq: entry.deviceSeq,
    at: entry.at,
    ...(recorded ? { seq: recorded.seq } : {}),
    data: entry.data,
    ...(entry.afterwards ? { afterwards: entry.afterwards } : {}),
    ...(recorded?.pin ? { pinCheckedAt: recorded.pin.checkedAt } : {}),
    ...(recorded?.conflict ? { conflict: recorded.conflict.why } : {}),
  };
}

/** Entries that still count towards the step. */
export function activeEntries(step: StepState | undefined): Kept[] {
  return (step?.entries ?? []).filter(
    (kept) => kept.voided === undefined && kept.takenBack === undefined && !aboutOthers.has(kept.kind),
  );
}

/** The last entry of a kind that still counts. */
export function lastOf<K extends Kept['kind']>(
  step: StepState | undefined,
  kind: K,
): (Kept & { data: EntryData<K> }) | undefined {
  const found = activeEntries(step).findLast((kept) => kept.kind === kind);
  // An entry's data was read by the schema of its kind before it came here.
  return found as (Kept & { data: EntryData<K> }) | undefined;
}

/** Changes a remembered entry wherever it is kept. */
export function patchEntry(state: JobState, id: string, patch: Partial<Kept>): JobState {
  const stepId = stepOfEntry(state, id);
  if (stepId === undefined) {
    return {
      ...state,
      unstepped: state.unstepped.map((kept) => (kept.id === id ? { ...kept, ...patch } : kept)),
    };
  }
  const step = state.steps[stepId];
  if (!step) return state;
  const entries = step.entries.map((kept) => (kept.id === id ? { ...kept, ...patch } : kept));
  const steps = writable(state, state.steps);
  steps[stepId] = { ...step, entries };
  return { ...state, steps };
}

/** The step that an entry of this id stands on. */
export function stepOfEntry(state: JobState, id: string): string | undefined {
  for (const [stepId, step] of Object.entries(state.steps)) {
    if (step.entries.some((kept) => kept.id === id)) return stepId;
  }
  return undefined;
}

/** The remembered entry of this id. */
export function findKept(state: JobState, id: string): Kept | undefined {
  const stepId = stepOfEntry(state, id);
  const among = stepId === undefined ? state.unstepped : (state.steps[stepId]?.entries ?? []);
  return among.find((kept) => kept.id === id);
}

/** The entry as a deviation names it: by the correction that its value comes from, where there is one. */
export function asGround(kept: Kept): Kept {
  return kept.valueFrom ? { ...kept, ...kept.valueFrom } : kept;
}
