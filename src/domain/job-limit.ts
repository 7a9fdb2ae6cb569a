import { judge } from './clearance';
import type { PlanLimit } from './plan';

export interface LimitJudgement {
  verdict: 'inside' | 'unsure' | 'outside' | 'no limit known';
  /** 0 at the low limit, 1 at the high one; null where the band is open. */
  place: number | null;
}

/**
 * Judges a decimal value against a limit of the engine sheet, guarded by its expanded uncertainty
 * (ISO 14253-1). A limit with one side is open at the other; one with neither is not judged at all.
 */
export function judgeLimit(limit: PlanLimit, value: string, uncertainty: string): LimitJudgement {
  if (limit.low === undefined && limit.high === undefined) return { verdict: 'no limit known', place: null };
  const reading = Number(value);
  // Less than none means nothing; what was recorded so all the same is judged by its size.
  const u = Math.abs(Number(uncertainty));
  const isOpen = limit.low === undefined || limit.high === undefined;
  // A far side that no reading can reach stands in for a missing one.
  const low = limit.low === undefined ? Math.min(reading, Number(limit.high)) - 2 * u - 1 : Number(limit.low);
  const high =
    limit.high === undefined ? Math.max(reading, Number(limit.low)) + 2 * u + 1 : Number(limit.high);
  const { verdict, place } = judge({ value: reading, low, high, uncertainty: u });
  return { verdict, place: isOpen ? null : place };
}
