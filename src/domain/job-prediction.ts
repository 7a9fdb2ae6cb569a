/* What a rod's clearance was predicted to be, and what it was measured to be. A prediction is never a measurement. */
import { addExact, exactOf, exactToNumber, subtractExact, type Exact } from './decimal';
import type { ClearanceReading, RodState } from './job-state';

const LEAST_PLACES = 3;

/** The clearance in the middle between what was read at either end, or what was read at the only one; mm. */
export function middleOf(readings: readonly Pick<ClearanceReading, 'clearance'>[]): Exact | undefined {
  const [first, second] = readings.map(({ clearance }) => exactOf(clearance));
  if (first === undefined || second === undefined) return first;
  const sum = addExact(first, second);
  return { units: sum.units * 5n, scale: sum.scale + 1 };
}

/** A length as people say it: at least three places, and no more than it has. */
export function clearanceText(clearance: Exact): string {
  const mm = exactToNumber(clearance);
  const places = /\.(\d+)$/.exec(String(mm))?.[1]?.length ?? 0;
  return mm.toFixed(Math.max(LEAST_PLACES, places));
}

/**
 * What was predicted of a rod beside what was measured, as "predicted 0.046, measured 0.048, 0.002 wider"; undefined
 * until both are known. Two ends are compared by their middle, because shells change both alike.
 */
export function predictionWords({ predicted, front, rear }: RodState): string | undefined {
  if (predicted === undefined || !front || !rear) return undefined;
  const measured = middleOf([front, rear]);
  if (measured === undefined) return undefined;
  const off = subtractExact(measured, exactOf(predicted));
  const size = { units: off.units < 0n ? -off.units : off.units, scale: off.scale };
  const how =
    off.units === 0n ? 'as predicted' : `${clearanceText(size)} ${off.units < 0n ? 'tighter' : 'wider'}`;
  return `predicted ${predicted}, measured ${clearanceText(measured)}, ${how}`;
}
