import type { JobState } from './job-state';
import { settleSteps } from './job-settle';
import type { PlanStep } from './plan';

/** Other shells than those measured: the readings are void and the rod is measured again. */
export function voidMeasurement(state: JobState, choose: PlanStep): JobState {
  const rod = choose.rod === undefined ? undefined : state.rods[choose.rod];
  if (!rod || (!rod.front && !rod.rear)) return state;
  const order = state.plan.steps.filter((step) => step.rod === choose.rod && step.phase === choose.phase);
  const from = order.findIndex((step) => step.id === choose.id);
  const to = order.findIndex((step) => step.kind === 'gauge');
  const why = 'other shells were chosen';
  return voidSteps(
    voidReadings(state, choose.rod, why),
    order.slice(from + 1, to + 1).map((s) => s.id),
    why,
  );
}

/** The readings of a rod no longer belong to what is fitted; they stay readable with the reason. */
export function voidReadings(state: JobState, rod: number | undefined, why: string): JobState {
  const present = rod === undefined ? undefined : state.rods[rod];
  if (!present) return state;
  const voided = [present.front, present.rear].flatMap((reading) => (reading ? [{ ...reading, why }] : []));
  return {
    ...state,
    rods: {
      ...state.rods,
      [present.rod]: {
        ...present,
        front: undefined,
        rear: undefined,
        voidReadings: [...present.voidReadings, ...voided],
      },
    },
  };
}

/** What these steps recorded no longer counts, and they are open again. */
export function voidSteps(state: JobState, stepIds: string[], why: string): JobState {
  const steps = { ...state.steps };
  for (const id of stepIds) {
    const step = steps[id];
    if (!step) continue;
    steps[id] = {
      ...step,
      entries: step.entries.map((kept) => (kept.voided ? kept : { ...kept, voided: why })),
    };
  }
  return settleSteps({ ...state, steps }, stepIds);
}
