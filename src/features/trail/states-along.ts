import { applyEntry, replay } from '@/domain/job';
import type { JobState } from '@/domain/job-state';
import type { ReadTrail } from './read-trail';

/** A state is kept at every so many entries, so that no other is farther than that from one. */
const STRIDE = 20;

/** Gives the job as it stood at any entry, quickly however long the trail is. */
export function statesAlong({ plans, entries }: ReadTrail): (upTo: number) => JobState {
  const recorded = entries.map((entry) => entry.recorded);
  const milestones = new Map<number, JobState>();

  function stateAt(upTo: number): JobState {
    const from = Math.floor((upTo - 1) / STRIDE) * STRIDE;
    const between = recorded.slice(from, upTo);
    // Moving to another plan is the replay's own affair.
    const isMoved = between.some(({ kind }) => kind === 'plan-moved');
    return from <= 0 || isMoved
      ? replay(plans, recorded, { upTo })
      : between.reduce(applyEntry, milestoneAt(from));
  }

  function milestoneAt(upTo: number): JobState {
    const state = milestones.get(upTo) ?? stateAt(upTo);
    milestones.set(upTo, state);
    return state;
  }

  return stateAt;
}
