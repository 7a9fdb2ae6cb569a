/*
 * Which step the Floor shows: the one that the technician went to, as long as it makes sense, else the next
 * that can be done. A witness point is an invitation, so it is never in the way.
 */
import { nextSteps, whyNot } from '@/domain/job';
import { isBlocked } from '@/domain/job-deviation';
import type { JobState } from '@/domain/job-state';
import { lastOf } from '@/domain/job-kept';
import { findStep, type PlanStep, type StepKind } from '@/domain/plan';
import { distanceIn } from './odometer';

/** Where the technician is on a job. */
export interface FloorPlace {
  step: string | null;
  /** They chose it, or it shows what was just read: it stays whatever its state. */
  isVisit: boolean;
  /** The action last shown, so that coming back can ask whether it was done. */
  action?: string | undefined;
}

export const NOWHERE: FloorPlace = { step: null, isVisit: false };

/**
 * Kinds that show what came of them after they are done, until the technician goes on. A reading that is inside
 * its limits is not one of them: its verdict stands over the next step's screen.
 */
const SHOWS_RESULT: readonly StepKind[] = ['hold', 'hand-over'];

/** Whether the screen stays after this step was done. */
export function staysAfter(state: JobState, step: PlanStep): boolean {
  const status = state.steps[step.id]?.status;
  if (status === 'waiting for a part') return false;
  if (status !== 'done' && status !== 'not applicable') return true;
  if (isBlocked(state, step.id)) return true;
  return status === 'done' && (SHOWS_RESULT.includes(step.kind) || isShortDrive(state, step));
}

/** A road test that was shorter than asked is no deviation, but whoever ends it is told. */
function isShortDrive(state: JobState, step: PlanStep): boolean {
  if (step.kind !== 'drive') return false;
  const own = state.steps[step.id];
  const started = lastOf(own, 'drive-started')?.data;
  const ended = lastOf(own, 'drive-ended')?.data;
  if (!started || !ended) return false;
  return Number(ended.odometer) - Number(started.odometer) < distanceIn(step, ended.unit) - 1;
}

/** The step to show; undefined when nothing can be done now. */
export function currentStep(state: JobState, place: FloorPlace): PlanStep | undefined {
  const wished = place.step === null ? undefined : findStep(state.plan, place.step);
  if (wished && (place.isVisit || isDoable(state, wished))) return wished;
  return following(state, wished);
}

/** What can be done after a step: the next in its own section, else the first of the plan. */
export function following(state: JobState, step: PlanStep | undefined): PlanStep | undefined {
  if (state.phase === 'parked') return state.plan.steps.find(({ kind }) => kind === 'resume');
  const open = nextSteps(state).filter(({ kind, id }) => kind !== 'witness' && id !== step?.id);
  if (!step) return open[0];
  const { steps } = state.plan;
  const after = new Set(steps.slice(steps.indexOf(step) + 1).map(({ id }) => id));
  return open.find((o) => o.phase === step.phase && o.section === step.section && after.has(o.id)) ?? open[0];
}

/** The step that would come after this one if all goes well, for the small line under the present one. */
export function comingAfter(state: JobState, step: PlanStep): PlanStep | undefined {
  const { steps } = state.plan;
  return steps
    .slice(steps.indexOf(step) + 1)
    .find((s) => s.onDemand !== true && s.kind !== 'witness' && isOpen(state, s.id));
}

/** Open witness points that may be looked at now. */
export function openWitnessPoints(state: JobState): PlanStep[] {
  return nextSteps(state).filter(({ kind }) => kind === 'witness');
}

/** Neither done nor set aside. */
export function isOpen(state: JobState, stepId: string): boolean {
  const status = state.steps[stepId]?.status;
  return status !== 'done' && status !== 'not applicable';
}

function isDoable(state: JobState, step: PlanStep): boolean {
  const status = state.steps[step.id]?.status;
  return isOpen(state, step.id) && status !== 'waiting for a part' && whyNot(state, step.id).ok;
}
