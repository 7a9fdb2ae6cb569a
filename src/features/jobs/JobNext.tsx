import type { JobState } from '@/domain/job-state';
import type { PlanStep } from '@/domain/plan';

const SHOWN = 6;

/** The steps that come, in the order of the plan; what can be done now and why is the Floor's to say. */
export function JobNext({ state }: { state: JobState }) {
  if (state.phase !== 'running') return null;
  const { phases } = state.plan;
  const coming = comingSteps(state).slice(0, SHOWN);
  if (coming.length === 0) return null;
  return (
    <section className="part">
      <h2 className="part-title">What comes next</h2>
      <ol className="job-list">
        {coming.map(({ id, title, phase }, i) => (
          <li key={id} className="job-list-pair">
            {i === 0 ? <b>{title}</b> : <span>{title}</span>}
            <span className="text-soft">
              {phase === coming[i - 1]?.phase ? '' : phases.find((one) => one.id === phase)?.name}
            </span>
          </li>
        ))}
      </ol>
    </section>
  );
}

function comingSteps(state: JobState): PlanStep[] {
  return state.plan.steps.filter(({ id, kind, onDemand }) => {
    const status = state.steps[id]?.status ?? 'open';
    return onDemand !== true && kind !== 'witness' && (status === 'open' || status === 'begun');
  });
}
