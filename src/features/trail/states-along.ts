import { replay } from '@/domain/job';
import type { JobState } from '@/domain/job-state';
import type { ReadTrail } from './read-trail';

/** So many states are kept: walking to and fro asks for the same few again. */
const KEPT = 200;

/** Gives the job as it stood at any entry, and remembers the states that were asked for last. */
export function statesAlong({ plans, entries }: ReadTrail): (upTo: number) => JobState {
  const recorded = entries.map((entry) => entry.recorded);
  const kept = new Map<number, JobState>();
  return (upTo) => {
    const known = kept.get(upTo);
    if (known !== undefined) return known;
    const state = replay(plans, recorded, { upTo });
    const [oldest] = kept.keys();
    if (kept.size >= KEPT && oldest !== undefined) kept.delete(oldest);
    kept.set(upTo, state);
    return state;
  };
}
