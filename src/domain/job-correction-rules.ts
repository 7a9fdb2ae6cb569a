import { clearanceFromParts } from './clearance';
import type { EntryData, EntryKind, EntryOf } from './entry';
import { activeEntries, findKept, stepOfEntry } from './job-kept';
import type { JobState, Kept, Verdict, Workshop } from './job-state';

function no(code: string, why: string, unlock?: string): Verdict {
  return { ok: false, code, why, ...(unlock === undefined ? {} : { unlock }) };
}

/** Kinds whose value can be superseded; every other kind is an act or a judgement. */
const correctable = new Set<EntryKind>([
  'done',
  'removed',
  'refitted',
  'counted',
  'inspected',
  'read',
  'chose-shells',
  'gauged',
  'tightened',
  'bolt-replaced',
  'fitted',
  'filled',
  'watch-checked',
  'drive-started',
  'drive-ended',
]);

/** Only the author, or a supervisor with the author shown, corrects or takes back. */
function whyNotWhose(kept: Kept, by: string, workshop: Workshop): Verdict {
  const roles = workshop.people.find(({ id }) => id === by)?.roles ?? [];
  return kept.by === by || roles.includes('supervisor')
    ? { ok: true }
    : no('not-author', `${kept.name} recorded this.`, 'They correct it, or a supervisor does.');
}

/** Figures that their form lets in and that nothing can have; also a correction may not bring them in. */
export function whyImpossible(kind: EntryKind, data: object): Verdict {
  if (kind === 'gauged') {
    const gauged = data as EntryData<'gauged'>;
    if (!(Number(gauged.clearance) > 0)) return no('impossible', 'A clearance is more than nothing.');
    if (Number(gauged.uncertainty) < 0) return no('impossible', 'An uncertainty is not less than nothing.');
    return gauged.by === 'parts' ? whyNotParts(gauged) : whyNotThread(gauged);
  }
  if (kind === 'tightened' && Number((data as EntryData<'tightened'>).value ?? '0') < 0)
    return no('impossible', 'A torque or an angle is not less than nothing.', 'Read it again.');
  return { ok: true };
}

/** A clearance by parts is the sum of its sizes, so that whoever reads it can add them up again. */
function whyNotParts({ clearance, parts }: EntryData<'gauged'>): Verdict {
  if (!parts) return no('parts-missing', 'A clearance by parts names the sizes of its parts.');
  const sizes = { housingBore: 0, upperWall: 0, lowerWall: 0, journal: 0 };
  for (const name of ['housingBore', 'upperWall', 'lowerWall', 'journal'] as const) {
    sizes[name] = Number(parts[name]);
    if (!(sizes[name] > 0)) return no('impossible', 'A part is larger than nothing.', 'Measure it again.');
  }
  return clearanceFromParts(sizes) === Number(clearance)
    ? { ok: true }
    : no('sum-differs', 'The clearance is not the sum of its parts.', 'Add them up again.');
}

function whyNotThread({ threadLot, cardLot }: EntryData<'gauged'>): Verdict {
  return threadLot === undefined || cardLot === undefined
    ? no('lot-missing', 'A thread is read by the lot of its packet and its card.', 'Say which thread it is.')
    : { ok: true };
}

/** A value may be superseded, with a reason, by data of the same kind. */
export function whyNotCorrected(
  state: JobState,
  entry: EntryOf<'corrected'>,
  workshop: Workshop,
  isDataOf: (kind: EntryKind, data: unknown) => boolean,
): Verdict {
  const kept = findKept(state, entry.data.of);
  if (!kept) return no('unknown-entry', 'The entry to correct is not there.');
  if (!correctable.has(kept.kind))
    return no('not-correctable', 'This is taken back or revoked, not corrected.');
  if (kept.takenBack !== undefined) return no('taken-back', 'This was taken back already.');
  if (!isDataOf(kept.kind, entry.data.data))
    return no('malformed', 'The correction does not have the form of what it corrects.');
  const possible = whyImpossible(kept.kind, entry.data.data);
  if (!possible.ok) return possible;
  return whyNotWhose(kept, entry.by, workshop);
}

/** An act may be taken back only while nothing later depends on it. */
export function whyNotTakenBack(state: JobState, entry: EntryOf<'taken-back'>, workshop: Workshop): Verdict {
  const kept = findKept(state, entry.data.of);
  if (!kept) return no('unknown-entry', 'The entry to take back is not there.');
  if (kept.kind === 'signed' || kept.kind === 'deviation-disposed')
    return no('revoke', 'A signature or a disposition is revoked.');
  if (kept.takenBack !== undefined) return no('taken-back', 'This was taken back already.');
  const stepId = stepOfEntry(state, kept.id);
  if (stepId !== undefined && dependsOn(state, stepId, kept)) {
    return no('depended-on', 'Later work stands on this.', 'Raise a deviation instead.');
  }
  return whyNotWhose(kept, entry.by, workshop);
}

function dependsOn(state: JobState, stepId: string, kept: Kept): boolean {
  const active = activeEntries(state.steps[stepId]);
  const isLast = active.at(-1)?.id === kept.id;
  if (!isLast) return true;
  if (state.steps[stepId]?.status !== 'done') return false;
  return state.plan.steps.some(
    (step) => step.needs.includes(stepId) && activeEntries(state.steps[step.id]).length > 0,
  );
}

/** Signatures and dispositions are revoked, never corrected. */
export function whyNotRevoked(state: JobState, entry: EntryOf<'revoked'>): Verdict {
  const { of } = entry.data;
  const isSignature = state.signatures.some((s) => s.entry === of && s.reopened === undefined);
  const isDisposition = state.deviations.some((d) => d.disposed?.entry === of);
  return isSignature || isDisposition
    ? { ok: true }
    : no('unknown-entry', 'There is no signature or disposition to revoke.');
}
