/* The blades of a feeler set that a gap between two limits can be told with. */
import type { PlanLimit } from '@/domain/plan';

/** Blades of a workshop's set come in steps of 0.05 mm; common practice, no source. */
const STEP = 5;
const HUNDREDTH = 100;
/** The thickest blade of a set, in hundredths of a millimetre. */
const THICKEST = 100;
/** So many blades beyond each limit, so that a gap outside is read as what it is. */
const BEYOND = 2;

/** The blades around the limits, thinnest first; none for what isn't gauged with blades. */
export function bladesAround({ unit, low, high }: PlanLimit): string[] {
  if (unit !== 'mm' || low === undefined || high === undefined) return [];
  const from = Math.floor(hundredths(low) / STEP) - BEYOND;
  const to = Math.ceil(hundredths(high) / STEP) + BEYOND;
  if (to * STEP > THICKEST) return [];
  return Array.from({ length: to - Math.max(1, from) + 1 }, (_, i) =>
    (((Math.max(1, from) + i) * STEP) / HUNDREDTH).toFixed(2),
  );
}

function hundredths(decimal: string): number {
  return Math.round(Number(decimal) * HUNDREDTH);
}
