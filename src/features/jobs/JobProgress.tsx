import { ProgressRail } from '@/components/ProgressRail';
import type { JobAnswer } from './job-answer';

export interface JobProgressProps {
  progress: JobAnswer['progress'];
  phase: string;
  /** The phase in which the next step lies. */
  at: string | undefined;
  next: string | undefined;
}

/** How far each phase is, and what comes next. */
export function JobProgress({ progress, phase, at, next }: JobProgressProps) {
  const phases = progress.map((one) => ({
    name: one.name,
    state: stateOf(one, at),
    note: `${one.done} of ${one.total}${one.blocked > 0 ? `, ${one.blocked} blocked` : ''}`,
  }));
  return (
    <section className="part">
      <h2 className="part-title">Progress</h2>
      <ProgressRail label="Phases" phases={phases} />
      <p className="mt-3">
        {phase === 'running' && next !== undefined && (
          <>
            Next: <b>{next}</b>
          </>
        )}
        {phase === 'running' && next === undefined && 'Nothing can be done just now: see what blocks it.'}
        {phase === 'parked' && 'Parked, made safe. It is resumed on the Floor.'}
        {phase === 'handed over' && 'Handed over.'}
        {phase === 'ended unfinished' && 'Ended unfinished. The engine is not to be run.'}
      </p>
    </section>
  );
}

function stateOf(
  phase: JobAnswer['progress'][number],
  at: string | undefined,
): 'done' | 'now' | 'waiting' | 'blocked' {
  if (phase.blocked > 0) return 'blocked';
  if (phase.done === phase.total) return 'done';
  return phase.name === at || phase.done > 0 ? 'now' : 'waiting';
}
