import { openOnValue } from '@/domain/job-countersign';
import { findSignature } from '@/domain/job-evidence';
import type { JobState, Kept } from '@/domain/job-state';

/** What comes of a correction, before it is touched. */
export function afterWords(state: JobState, kept: Kept, isClass: 'clerical' | 'substantive'): string {
  const isSigned = state.plan.steps.some(
    (step) =>
      step.kind === 'hold' &&
      kept.step !== undefined &&
      step.covers.includes(kept.step) &&
      findSignature(state, step.id) !== undefined,
  );
  if (isClass === 'substantive' && kept.step !== undefined && openOnValue(state, kept.step, kept).length > 0)
    return 'the deviation stays open until someone else countersigns';
  if (!isSigned) return 'the record keeps both';
  return isClass === 'clerical' ? 'someone else countersigns it' : 'the hold point opens again';
}
