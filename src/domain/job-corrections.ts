/* What corrections, take-backs and revocations change. The earlier entry stays; only what it counts for differs. */
import type { EntryData, EntryOf } from './entry';
import { addAuthors } from './job-authors';
import { askToCountersign, openOnValue } from './job-countersign';
import { raiseDeviation } from './job-deviation';
import { classOf, openAgain, stepTouched } from './job-evidence';
import { findKept, lastOf, patchEntry, stepOfEntry } from './job-kept';
import { settleSteps } from './job-settle';
import type { JobState, Kept } from './job-state';
import { voidMeasurement } from './job-void';
import { findStep, type PlanStep, type StepOf } from './plan';

/** A value is superseded, and judged anew as if it had been read so. */
export function applyCorrection(state: JobState, entry: EntryOf<'corrected'>, kept: Kept): JobState {
  const { of, data, reason } = entry.data;
  const before = findKept(state, of);
  const stepId = stepOfEntry(state, of);
  const isClass = classOf(state, entry.data);
  const { id, by, name, at } = kept;
  const valueFrom = isClass === 'substantive' ? { valueFrom: { id, by, name, at } } : {};
  // The data was checked against its kind before it was recorded; the fold takes what stands there.
  let next = patchEntry(state, of, { data: data, correctedBy: id, ...valueFrom });
  if (!before || stepId === undefined) return next;
  if (isClass === 'clerical' && isUnderSignature(state, stepId)) {
    const asked = { correction: id, step: stepId, reason, by };
    next = { ...next, countersigns: [...next.countersigns, asked] };
  }
  next = addAuthors(next, stepId, [by, ...kept.with]);
  if (isClass === 'clerical') return settleSteps(next, [stepId]);
  const step = findStep(next.plan, stepId);
  const open = openOnValue(state, stepId, before);
  next = settleSteps(next, [stepId]);
  if (step?.kind === 'tighten' && isNoLongerOver(before, data)) next = askAboutBolt(next, step, kept, data);
  const earlier = [...open, ...next.deviations.filter(({ id }) => id === `${kept.id}:${NOT_OVER}`)];
  next = askToCountersign(next, stepId, kept, { earlier, reason });
  if (step?.kind === 'tighten' && before.kind === 'tightened')
    return judgePast(state, next, step, kept, data as EntryData<'tightened'>);
  if (step?.kind === 'choose-shells' && lastOf(next.steps[stepId], 'chose-shells')?.id === of)
    return voidMeasurement(askAboutFitted(next, step, kept), step);
  return next;
}

function isUnderSignature(state: JobState, stepId: string): boolean {
  return state.signatures.some((signature) => {
    const hold = findStep(state.plan, signature.step);
    return signature.reopened === undefined && hold?.kind === 'hold' && hold.covers.includes(stepId);
  });
}

/** The rule by which a bolt that was condemned waits for somebody else's word. */
const NOT_OVER = 'corrected-over';

function isNoLongerOver(before: Kept, data: object): data is EntryData<'tightened'> {
  const isOver = (one: object): boolean => 'outcome' in one && one.outcome === 'over';
  return before.kind === 'tightened' && isOver(before.data) && !isOver(data);
}

/** Nobody takes the condemnation off their own bolt. */
function askAboutBolt(
  state: JobState,
  step: StepOf<'tighten'>,
  kept: Kept,
  { bolt }: EntryData<'tightened'>,
): JobState {
  return raiseDeviation(
    state,
    { ...kept, step: step.id },
    {
      rule: NOT_OVER,
      class: step.class,
      words: `By a correction, bolt ${bolt} was not turned too far after all`,
      blocks: true,
      rod: step.rod,
    },
  );
}

/** A programme that was finished and by the corrected value is not: bolts that are built in hold what they should not. */
function judgePast(
  before: JobState,
  after: JobState,
  step: StepOf<'tighten'>,
  kept: Kept,
  { bolt, value, target, outcome }: EntryData<'tightened'>,
): JobState {
  if (before.steps[step.id]?.status !== 'done' || after.steps[step.id]?.status === 'done') return after;
  const unit = target.kind === 'angle' ? '°' : ` ${target.unit}`;
  const read = value === undefined ? '' : `, ${value}${unit} of ${target.target}${unit}`;
  const what = outcome === 'over' ? 'was turned too far' : 'was not turned as recorded';
  return raiseDeviation(
    after,
    { ...kept, step: step.id },
    {
      rule: 'corrected-outside',
      class: step.class,
      words: `By a correction, bolt ${bolt} ${what}${read}`,
      blocks: true,
      rod: step.rod,
    },
  );
}

/** Shells that are built in by now and were never measured are for the supervisor to judge. */
function askAboutFitted(state: JobState, choose: PlanStep, kept: Kept): JobState {
  const isFitted = state.plan.steps.some(
    (step) =>
      step.kind === 'tighten' &&
      step.fit === 'final' &&
      step.rod === choose.rod &&
      state.steps[step.id]?.status !== 'open',
  );
  if (!isFitted) return state;
  return raiseDeviation(
    state,
    { ...kept, step: choose.id },
    {
      rule: 'shells-differ',
      class: 'A',
      words: `By a correction, rod ${choose.rod} has its final fit with shells that were not measured`,
      blocks: true,
      rod: choose.rod,
    },
  );
}

/** An act is not done, or done wrong; either way its first record stays. */
export function applyTakeBack(state: JobState, entry: EntryOf<'taken-back'>, kept: Kept): JobState {
  const { of, which } = entry.data;
  const stepId = stepOfEntry(state, of);
  let next = patchEntry(state, of, { takenBack: which });
  if (stepId === undefined) return next;
  next = {
    ...next,
    effects: which === 'done, but wrong' ? next.effects : next.effects.filter((e) => e.entry !== of),
  };
  next = settleSteps(addAuthors(next, stepId, [kept.by, ...kept.with]), [stepId]);
  const step = findStep(next.plan, stepId);
  if (which === 'done, but wrong' && step?.kind !== 'tighten') {
    next = raiseDeviation(
      next,
      { ...kept, step: stepId },
      {
        rule: 'done-wrong',
        class: step?.class ?? 'C',
        words: `Done, but wrong: ${step?.title ?? stepId}`,
        blocks: true,
      },
    );
  }
  return next;
}

/** A signature no longer stands, or a deviation is open again. */
export function applyRevocation(state: JobState, entry: EntryOf<'revoked'>, kept: Kept): JobState {
  const { of, reason } = entry.data;
  const touched = stepTouched(state, kept);
  let next = patchEntry(state, of, { revokedBy: kept.id });
  next = openAgain(next, (signature) => signature.entry === of, `revoked: ${reason}`);
  next = {
    ...next,
    deviations: next.deviations.map((d) => (d.disposed?.entry === of ? { ...d, disposed: undefined } : d)),
  };
  return touched === undefined ? next : settleSteps(next, [touched]);
}
