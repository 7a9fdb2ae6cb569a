import { isBlocked } from './job-deviation';
import type { JobState } from './job-state';
import { findStep } from './plan';

export interface PhaseProgress {
  id: string;
  name: string;
  done: number;
  total: number;
  blocked: number;
}

/** How far each phase is: steps done or not applicable, of those that must be. */
export function progressOf(state: JobState): PhaseProgress[] {
  return state.plan.phases.map((phase) => {
    const steps = phase.steps.filter((id) => {
      const step = findStep(state.plan, id);
      return step !== undefined && step.onDemand !== true && step.kind !== 'witness';
    });
    const done = steps.filter((id) => {
      const status = state.steps[id]?.status;
      return status === 'done' || status === 'not applicable';
    });
    return {
      id: phase.id,
      name: phase.name,
      done: done.length,
      total: steps.length,
      blocked: steps.filter((id) => isBlocked(state, id)).length,
    };
  });
}
