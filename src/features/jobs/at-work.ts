import type { JobLine } from './job-answer';

/** Who works on a job now: nobody once it is over, and whoever opened it has not begun it by that. */
export function atWork({
  working,
  state,
  openedAt,
}: Pick<JobLine, 'working' | 'state' | 'openedAt'>): JobLine['working'] {
  const isOver = state === 'handed over' || state === 'ended';
  return isOver || working?.since === openedAt ? undefined : working;
}
