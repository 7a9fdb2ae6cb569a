/*
 * Corrections that somebody else puts their name to. A clerical one under a signature waits for it until handover;
 * a substantive one by which a value comes back inside its limits leaves the deviation on the earlier value open
 * until then, because nobody lets their own deviation rest.
 */
import { settleSteps } from './job-settle';
import type { Countersign, Deviation, JobState, Kept } from './job-state';
import type { PlanStep } from './plan';

/** Rules that judge all readings of a step together, so that any of them may have raised the deviation. */
const TOGETHER = new Set(['taper', 'spread']);

/** Rules whose deviations no other value takes away: what happened is to be judged, or was not a value. */
const BY_THEMSELVES = new Set(['conflict', 'done-wrong']);

/** The rule that judges several answers at once: another bad one says nothing about the one that was corrected. */
const MANY_ANSWERS = 'not-in-order';

/** The corrections that wait for a countersign, in the order in which they were made. */
export function dueCountersigns(state: JobState): Countersign[] {
  return state.countersigns.filter((asked) => isDue(state, asked));
}

/** Asked for, and neither given nor settled by a disposition or by another correction meanwhile. */
export function isDue(state: JobState, { countersignedBy, deviations }: Countersign): boolean {
  return countersignedBy === undefined && (deviations?.some((id) => isOpen(state, id)) ?? true);
}

function isOpen(state: JobState, id: string): boolean {
  return state.deviations.some((one) => one.id === id && one.blocks && !one.disposed);
}

/** The correction whose countersign would let this deviation rest. */
export function correctionOver(state: JobState, deviation: string): Countersign | undefined {
  return dueCountersigns(state).find(({ deviations = [] }) => deviations.includes(deviation));
}

/** The open deviations that the value of an entry raised, alone or together with others of its step. */
export function openOnValue(state: JobState, stepId: string, before: Kept): Deviation[] {
  const own = new Set(groundsOf(before));
  const all = new Set(state.steps[stepId]?.entries.flatMap(groundsOf));
  return state.deviations.filter(({ id, rule, disposed, blocks }) => {
    const [ground = ''] = id.split(':');
    if (rule === undefined || BY_THEMSELVES.has(rule) || disposed || !blocks) return false;
    return own.has(ground) || (TOGETHER.has(rule) && all.has(ground));
  });
}

function groundsOf(kept: Kept): string[] {
  return kept.valueFrom ? [kept.id, kept.valueFrom.id] : [kept.id];
}

/**
 * What becomes of the deviations on the earlier value, once the corrected one is judged: one that the corrected
 * value raised anew rests, and the others wait for somebody else to countersign.
 */
export function askToCountersign(
  state: JobState,
  step: string,
  kept: Kept,
  { earlier, reason }: { earlier: readonly Deviation[]; reason: string },
): JobState {
  const anew = state.deviations.filter((one) => one.id.startsWith(`${kept.id}:`) && !earlier.includes(one));
  const isAnew = (one: Deviation): boolean =>
    one.rule !== MANY_ANSWERS && anew.some((other) => questionOf(other) === questionOf(one));
  const replaced = new Set(earlier.filter(isAnew).map(({ id }) => id));
  const held = earlier.flatMap(({ id }) => (replaced.has(id) ? [] : [id]));
  const next = letRest(state, replaced);
  if (held.length === 0) return next;
  // The newest correction is the one to be looked at; what it supersedes asks for nothing more.
  const before = next.countersigns.map((asked) =>
    asked.deviations === undefined
      ? asked
      : { ...asked, deviations: asked.deviations.filter((id) => !held.includes(id)) },
  );
  const asked = { correction: kept.id, step, reason, by: kept.by, deviations: held };
  return { ...next, countersigns: [...before, asked] };
}

/** A value has one question asked of it; taper and spread are questions of their own. */
function questionOf({ rule }: Deviation): string {
  return rule !== undefined && TOGETHER.has(rule) ? rule : 'value';
}

function letRest(state: JobState, ids: ReadonlySet<string>): JobState {
  if (ids.size === 0) return state;
  const deviations = state.deviations.map((one) =>
    ids.has(one.id) && one.blocks && !one.disposed
      ? { ...one, blocks: false, words: `${one.words} (since corrected)` }
      : one,
  );
  return { ...state, deviations };
}

/** Somebody else puts their name to a correction: the deviation that it corrects rests. */
export function countersign(state: JobState, correction: string, by: string): JobState {
  const asked = state.countersigns.find((one) => one.correction === correction);
  if (!asked) return state;
  const countersigns = state.countersigns.map((one) =>
    one.correction === correction ? { ...one, countersignedBy: by } : one,
  );
  const next = letRest({ ...state, countersigns }, new Set(asked.deviations));
  return asked.deviations === undefined ? next : settleSteps(next, [asked.step]);
}

/** Signing again covers the clerical corrections that were made under the signature before. */
export function coverCorrections(state: JobState, step: PlanStep, kept: Kept): JobState {
  if (step.kind !== 'hold' || state.countersigns.length === 0) return state;
  const countersigns = state.countersigns.map((asked) =>
    asked.countersignedBy === undefined &&
    asked.deviations === undefined &&
    asked.by !== kept.by &&
    step.covers.includes(asked.step)
      ? { ...asked, countersignedBy: kept.by }
      : asked,
  );
  return { ...state, countersigns };
}
