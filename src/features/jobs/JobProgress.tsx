import { ProgressRail } from '@/components/ProgressRail';
import type { JobAnswer } from './job-answer';

export interface JobProgressProps {
  progress: JobAnswer['progress'];
  phase: string;
  /** The phase in which the next step lies. */
  at: string | undefined;
  /** Is there a step that can be done now? */
  hasNext: boolean;
}

/** How far each phase is. */
export function JobProgress({ progress, phase, at, hasNext }: JobProgressProps) {
  const phases = progress.map((one) => ({
    name: one.name,
    state: stateOf(one, at),
    note: `${one.done} of ${one.total}${one.blocked > 0 ? `, ${one.blocked} blocked` : ''}`,
  }));
  const words = standingWords(phase, hasNext);
  return (
    <section className="job-progress" aria-label="Progress">
      <ProgressRail label="Phases" phases={phases} />
      {words !== undefined && <p className="job-standing">{words}</p>}
    </section>
  );
}

function standingWords(phase: string, hasNext: boolean): string | undefined {
  if (phase === 'running') return hasNext ? undefined : 'Nothing can be done just now: see what blocks it.';
  return phase === 'handed over' ? 'Handed over.' : undefined;
}

function stateOf(
  phase: JobAnswer['progress'][number],
  at: string | undefined,
): 'done' | 'now' | 'waiting' | 'blocked' {
  if (phase.blocked > 0) return 'blocked';
  if (phase.done === phase.total) return 'done';
  return phase.name === at || phase.done > 0 ? 'now' : 'waiting';
}
