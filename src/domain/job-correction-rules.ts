import { correctableKinds, correctionClass } from './correction-class';
import type { EntryKind, EntryOf } from './entry';
import { whyNotInItsPlace } from './job-correction-form';
import { isDue } from './job-countersign';
import { activeEntries, findKept, stepOfEntry } from './job-kept';
import type { Countersign, JobState, Kept, Verdict, Workshop } from './job-state';
import { findStep } from './plan';

const OK: Verdict = { ok: true };

function no(code: string, why: string, unlock?: string): Verdict {
  return { ok: false, code, why, ...(unlock === undefined ? {} : { unlock }) };
}

/** Only the author, or a supervisor with the author shown, corrects or takes back. */
export function whyNotWhose(kept: Kept, by: string, { people }: Pick<Workshop, 'people'>): Verdict {
  const roles = people.find(({ id }) => id === by)?.roles ?? [];
  return kept.by === by || roles.includes('supervisor')
    ? OK
    : no('not-author', `${kept.name} recorded this.`, 'They correct it, or a supervisor does.');
}

/** What is said about an entry stands on that entry's own step or on none, so that no other step is touched by it. */
function whyNotItsStep(kept: Kept, step: string | undefined): Verdict {
  return step === undefined || step === kept.step
    ? OK
    : no('wrong-step', 'This is about an entry of another step.');
}

/** A value may be superseded, with a reason, by data of the same kind. */
export function whyNotCorrected(
  state: JobState,
  entry: EntryOf<'corrected'>,
  workshop: Workshop,
  isDataOf: (kind: EntryKind, data: unknown) => boolean,
): Verdict {
  const { of, data } = entry.data;
  const kept = findKept(state, of);
  if (!kept) return no('unknown-entry', 'The entry to correct is not there.');
  const can = whyNotCorrectable(kept);
  if (!can.ok) return can;
  const step = whyNotItsStep(kept, entry.step);
  if (!step.ok) return step;
  if (!isDataOf(kept.kind, data))
    return no('malformed', 'The correction does not have the form of what it corrects.');
  const whose = whyNotWhose(kept, entry.by, workshop);
  if (!whose.ok) return whose;
  const isClass = correctionClass(kept.data, data);
  if (isClass === undefined) return no('no-change', 'This is what stands there already.');
  if (isClass === 'substantive' && entry.data.class === 'clerical') {
    return no(
      'not-clerical',
      'This changes what was measured, done or fitted: it is no slip of the pen.',
      'Correct it as substantive; a hold point over it opens again.',
    );
  }
  const plan = kept.step === undefined ? undefined : findStep(state.plan, kept.step);
  return whyNotInItsPlace(state, plan, kept, data, workshop);
}

/** May the value of this entry be superseded at all, by whoever may? */
export function whyNotCorrectable(kept: Kept): Verdict {
  if (kept.kind === 'signed' || kept.kind === 'deviation-disposed')
    return no('not-correctable', 'A signature or a disposition is revoked, not corrected.');
  if (!correctableKinds.has(kept.kind))
    return no('not-correctable', 'This has no value to correct: it is taken back.');
  if (kept.takenBack !== undefined) return no('taken-back', 'This was taken back already.');
  if (kept.voided !== undefined) return no('void', `This no longer counts: ${kept.voided}.`);
  return OK;
}

/** Kinds that are said, signed or arranged: revoked, disposed of or said anew, never taken back as an act. */
const notActs: ReadonlySet<EntryKind> = new Set<EntryKind>([
  'opened',
  'took-over',
  'tool-taken',
  'witnessed',
  'work-signed',
  'countersigned',
  'deviation-raised',
  'corrected',
  'taken-back',
  'revoked',
  'plan-moved',
  'extra-work',
  'parked',
  'resumed',
  'ended-unfinished',
  'handed-over',
  'refused',
  'tablet-lost',
  'restored',
  'erased',
]);

/** An act may be taken back only while nothing later depends on it. */
export function whyNotTakenBack(state: JobState, entry: EntryOf<'taken-back'>, workshop: Workshop): Verdict {
  const kept = findKept(state, entry.data.of);
  if (!kept) return no('unknown-entry', 'The entry to take back is not there.');
  if (kept.kind === 'signed' || kept.kind === 'deviation-disposed')
    return no('revoke', 'A signature or a disposition is revoked.');
  if (kept.kind === 'deviation-raised')
    return no('not-an-act', 'A deviation is disposed of, not taken back.', 'The supervisor disposes of it.');
  if (notActs.has(kept.kind)) return no('not-an-act', 'This is not an act that can be taken back.');
  if (kept.takenBack !== undefined) return no('taken-back', 'This was taken back already.');
  const own = whyNotItsStep(kept, entry.step);
  if (!own.ok) return own;
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
  const signature = state.signatures.find((s) => s.entry === of);
  if (signature?.reopened !== undefined)
    return no('already-open', 'This signature no longer stands.', 'Sign the hold point again.');
  const isDisposition = state.deviations.some((d) => d.disposed?.entry === of);
  return signature !== undefined || isDisposition
    ? OK
    : no('unknown-entry', 'There is no signature or disposition to revoke.');
}

/** A correction that asks for it is countersigned once, by somebody with no hand in it or in its step. */
export function whyNotCountersigned(state: JobState, entry: EntryOf<'countersigned'>): Verdict {
  const asked = state.countersigns.find(({ correction }) => correction === entry.data.of);
  return asked
    ? whyNotCountersignedBy(state, asked, entry.by)
    : no('unknown-entry', 'There is no correction that asks for this countersign.');
}

/** May this person countersign this correction, as far as it is a matter of who worked on it? */
export function whyNotCountersignedBy(state: JobState, asked: Countersign, person: string): Verdict {
  if (asked.countersignedBy !== undefined)
    return no('already-signed', 'This correction is countersigned already.');
  if (!isDue(state, asked))
    return no('settled', 'The deviation was disposed of, or the value was corrected again since.');
  if (asked.by === person)
    return no('own-work', 'Nobody countersigns their own correction.', 'Someone else does.');
  const isOverValue = asked.deviations !== undefined || findStep(state.plan, asked.step)?.class === 'A';
  return isOverValue && state.authors[asked.step]?.includes(person) === true
    ? no('own-work', 'The signer had a hand in this work.', 'Someone who did none of it countersigns.')
    : OK;
}
