import { nextTightening, tighteningRecords } from '@/domain/job';
import type { EntryData } from '@/domain/entry';
import type { JobState, Workshop } from '@/domain/job-state';
import type { PlanStep, StepOf } from '@/domain/plan';
import { fitToolInHand, wantedFor, type Hand } from './tool-choice';

/** Whether a step is a tightening programme that has begun and is not finished. */
export function isCapBegun(state: JobState, step: PlanStep | undefined): step is StepOf<'tighten'> {
  if (step?.kind !== 'tighten' || tighteningRecords(state, step).length === 0) return false;
  return nextTightening(state, step) !== null;
}

/** The programme that stands half done on a running job; one that waits for a part is in nobody's hands. */
export function capInHand(state: JobState): StepOf<'tighten'> | undefined {
  if (state.phase !== 'running') return undefined;
  return state.plan.steps.find(
    (step): step is StepOf<'tighten'> =>
      isCapBegun(state, step) && state.steps[step.id]?.status !== 'waiting for a part',
  );
}

/** "1A and 1B" or the one bolt's name. */
export function capWords({ bolts }: StepOf<'tighten'>): string {
  return bolts.length < 3 ? bolts.join(' and ') : `${bolts[0] ?? ''} to ${bolts.at(-1) ?? ''}`;
}

/**
 * Whether taking this tool changes the one that the cap in hand is worked with. A tool that the Floor asked for,
 * because none in hand was fit, changes nothing: the pass could not have been recorded before.
 */
export function isToolChange(
  state: JobState,
  workshop: Workshop,
  step: PlanStep | undefined,
  { use, tool }: EntryData<'tool-taken'>,
  now: number,
): boolean {
  if (!isCapBegun(state, step)) return false;
  const wanted = wantedFor(use, step.class, torqueWanted(state, step, use));
  const held = fitToolInHand(state, workshop, use, wanted, now);
  return held !== undefined && held.id !== tool.id;
}

/** The torque that the next pass of a step asks of a wrench, in N·m; undefined for anything else. */
export function torqueWanted(state: JobState, step: PlanStep | undefined, hand: Hand): number | undefined {
  if (step?.kind !== 'tighten' || hand !== 'torque') return undefined;
  const next = nextTightening(state, step);
  return next?.kind === 'stage' && next.spec.kind === 'torque' ? next.spec.target : undefined;
}
