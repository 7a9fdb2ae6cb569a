/*
 * The fold: plan and entries make the state of a job. It is total (a recorded entry is a fact, so it is
 * never thrown at) and pure (no clock, no chance, no I/O). What may be recorded is asked of job-rules.ts;
 * here everything is taken as having happened. A state is never changed in place: screens keep old ones.
 */
import type { Entry, EntryOf, Recorded } from './entry';
import { applyCorrection, applyRevocation, applyTakeBack } from './job-corrections';
import { countersign, coverCorrections } from './job-countersign';
import { partUnheard, raiseConflict, raiseDeviation, remark } from './job-deviation';
import { noteAuthor } from './job-authors';
import { reopenSignatures } from './job-evidence';
import { settleSteps } from './job-settle';
import { keep } from './job-kept';
import type { JobState, Kept, RodState, StepState } from './job-state';
import { writable } from './job-tables';
import { checkPace } from './job-tightening';
import { voidMeasurement, voidReadings, voidSteps } from './job-void';
import { signWork } from './job-work';
import { findStep, rodsOf, type Plan, type PlanStep } from './plan';

export { findKept } from './job-kept';
export { evidenceFor } from './job-evidence';
export { progressOf, type PhaseProgress } from './job-progress';
export { mayRecord } from './job-rules';
export { nextSteps, whyNot } from './job-order';
export { nextTightening, tighteningRecords } from './job-tightening';

/** The state of a job of this plan before anything has happened. */
export function emptyJob(plan: Plan): JobState {
  const steps: Record<string, StepState> = {};
  for (const step of plan.steps) steps[step.id] = { status: 'open', entries: [] };
  const rods: Record<string, RodState> = {};
  for (const rod of rodsOf(plan))
    rods[rod] = { rod, cap: 'on', shells: 'old', thread: 'none', voidReadings: [] };
  const bolts: JobState['bolts'] = {};
  for (const rod of rodsOf(plan)) {
    for (const { bolt } of plan.engine.capBolts) {
      const name = `${rod}${bolt}`;
      bolts[name] = { bolt: name, set: 'old', used: {}, replaced: 0, cyclesDone: 0 };
    }
  }
  return {
    plan,
    job: null,
    number: null,
    phase: 'not opened',
    count: 0,
    seq: 0,
    steps,
    crankAngle: 0,
    effects: [],
    rods,
    bolts,
    open: [],
    tallies: {},
    tools: {},
    toolsTaken: [],
    lots: {},
    deviations: [],
    signatures: [],
    countersigns: [],
    authors: {},
    people: {},
    remarks: [],
    unstepped: [],
  };
}

/** Folds a job's entries, in order, each under the plan that is in force when it comes. */
export function replay(
  plans: ReadonlyMap<string, Plan>,
  entries: readonly (Entry | Recorded)[],
  { upTo = Number.POSITIVE_INFINITY }: { upTo?: number } = {},
): JobState {
  const [first] = entries;
  const plan = first && plans.get(first.plan);
  if (!plan) throw new RangeError('The plan of the first entry is not among the plans given.');
  let state = emptyJob(plan);
  for (const entry of entries) {
    if ('seq' in entry && entry.seq > upTo) break;
    const moved = entry.kind === 'plan-moved' ? plans.get(entry.data.to) : undefined;
    state = applyEntry(moved ? moveTo(state, moved) : state, entry);
  }
  return state;
}

/** One entry later. An entry on a step that the plan doesn't have is kept and changes nothing else. */
export function applyEntry(state: JobState, entry: Entry | Recorded): JobState {
  const kept = keep(entry);
  const step = entry.step === undefined ? undefined : findStep(state.plan, entry.step);
  let next = noteAuthor({ ...state, count: state.count + 1, seq: kept.seq ?? state.seq }, kept);
  next = keepOn(next, step, kept);
  next = reopenSignatures(next, kept);
  next = applyKind(next, entry, kept, step);
  if ('conflict' in entry && entry.conflict && entry.kind === 'work-signed') {
    // What its author claims and what came here differ: nothing of the work itself hangs on that.
    next = remark(next, kept, 'work-signed', entry.conflict.why);
  } else if ('conflict' in entry && entry.conflict) {
    next = raiseConflict(next, kept, entry.conflict);
  }
  return checkPace(next, kept);
}

function keepOn(state: JobState, step: PlanStep | undefined, kept: Kept): JobState {
  if (!step) return { ...state, unstepped: [...state.unstepped, kept] };
  const present = state.steps[step.id] ?? { status: 'open', entries: [] };
  const steps = writable(state, state.steps);
  steps[step.id] = { ...present, entries: [...present.entries, kept] };
  return { ...state, steps };
}

/** What the kind of entry changes beside its own step, and then the step itself. */
function applyKind(state: JobState, entry: Entry, kept: Kept, step: PlanStep | undefined): JobState {
  const changed = applyToJob(state, entry, kept);
  if (changed) return changed;
  switch (entry.kind) {
    case 'corrected':
      return applyCorrection(state, entry, kept);
    case 'taken-back':
      return applyTakeBack(state, entry, kept);
    case 'revoked':
      return applyRevocation(state, entry, kept);
    case 'deviation-disposed':
      return applyDisposition(state, entry, kept);
    case 'measuring-again':
      return step?.kind === 'gauge'
        ? reopenRange(state, step, step.measureAgainFrom, 'measured again')
        : state;
    case 'signed':
      return step ? coverCorrections(settleSteps(state, [step.id]), step, kept) : state;
    case 'chose-shells':
      return step ? voidMeasurement(settleSteps(state, [step.id]), step) : state;
    default:
      return step ? settleSteps(state, [step.id]) : state;
  }
}

/** Kinds that belong to the job as a whole. Undefined when the kind belongs to its step. */
function applyToJob(state: JobState, entry: Entry, kept: Kept): JobState | undefined {
  switch (entry.kind) {
    case 'opened': {
      const { number, odometer } = entry.data;
      return { ...state, job: entry.job, number, odometer, openedAt: entry.at, phase: 'running' };
    }
    case 'took-over': {
      const working = { by: entry.by, name: entry.author.name, since: entry.at, device: entry.device };
      return { ...state, working };
    }
    case 'tool-taken': {
      const { use, tool } = entry.data;
      const held = { ...tool, at: entry.at };
      const others = state.toolsTaken.filter((taken) => taken.id !== tool.id || taken.use !== use);
      return {
        ...state,
        tools: { ...state.tools, [use]: held },
        toolsTaken: [{ ...held, use }, ...others],
      };
    }
    case 'deviation-raised': {
      const { class: criticalClass, words, blocks, rod } = entry.data;
      return raiseDeviation(state, kept, { class: criticalClass, words, blocks, rod });
    }
    case 'countersigned':
      return countersign(state, entry.data.of, entry.by);
    case 'work-signed':
      return signWork(state, entry);
    case 'ended-unfinished':
      return { ...state, phase: 'ended unfinished' };
    case 'tablet-lost':
      return raiseDeviation(state, kept, {
        rule: 'tablet-lost',
        class: 'A',
        words: `A tablet was declared lost; its records from number ${entry.data.from} on never came.`,
        blocks: true,
      });
    case 'refused':
      return remark(state, kept, 'refused', `Something was refused: ${entry.data.reason}`);
    case 'restored':
      return remark(state, kept, 'restored', `The server was restored to entry ${entry.data.after}.`);
    case 'erased':
      return remark(state, kept, 'erased', `Personal data was erased: ${entry.data.reason}`);
    default:
      return undefined;
  }
}

/** Where the rules already say what is to be done again, a disposition voids nothing more. */
const SETTLED_BY_ITSELF = new Set(['conflict', 'corrected-outside', 'shells-differ']);

function applyDisposition(state: JobState, entry: EntryOf<'deviation-disposed'>, kept: Kept): JobState {
  const { deviation: id, disposition, reason } = entry.data;
  const deviation = state.deviations.find((d) => d.id === id);
  if (!deviation)
    return remark(state, kept, 'unknown-deviation', 'A disposition names a deviation that is not there.');
  const disposed = { entry: kept.id, by: kept.by, name: kept.name, at: kept.at, disposition, reason };
  const parted = partUnheard(state, deviation, entry.basis);
  const next: JobState = {
    ...parted,
    deviations: parted.deviations.map((d) => (d.id === id ? { ...d, disposed } : d)),
  };
  const step = deviation.step === undefined ? undefined : findStep(state.plan, deviation.step);
  if (!step) return next;
  if (disposition === 'accept as is') return settleSteps(next, [step.id]);
  if (step.kind === 'gauge') return reopenRange(next, step, step.reworkFrom, `${disposition}: ${reason}`);
  // A hold point or a conflict is not done again by being disposed of; an act outside its limits is.
  if (deviation.rule === undefined || SETTLED_BY_ITSELF.has(deviation.rule))
    return settleSteps(next, [step.id]);
  return voidSteps(next, [step.id], `${disposition}: ${reason}`);
}

/** Opens the steps of the same rod from one up to the gauge step again; what they recorded no longer counts. */
function reopenRange(state: JobState, gauge: PlanStep, fromStep: string, why: string): JobState {
  const order = state.plan.steps.filter((step) => step.rod === gauge.rod && step.phase === gauge.phase);
  const from = order.findIndex((step) => step.id === fromStep);
  const to = order.findIndex((step) => step.id === gauge.id);
  if (from < 0 || to < from) return state;
  return voidSteps(
    voidReadings(state, gauge.rod, why),
    order.slice(from, to + 1).map((step) => step.id),
    why,
  );
}

/** Takes the job to a newer plan: what was recorded stays on the steps that both plans have. */
function moveTo(state: JobState, plan: Plan): JobState {
  const fresh = emptyJob(plan);
  const steps = { ...fresh.steps };
  const unstepped = [...state.unstepped];
  for (const [id, step] of Object.entries(state.steps)) {
    if (steps[id]) steps[id] = step;
    else unstepped.push(...step.entries);
  }
  return settleSteps({ ...state, plan, steps, unstepped }, Object.keys(steps));
}
