import normalCdf from '@stdlib/stats-base-dists-normal-cdf';
import { mean as meanOf, sampleStandardDeviation } from 'simple-statistics';
import { exactOf, exactToNumber, subtractExact } from './decimal';
import { requireFinite, requirePositive } from './number-checks';

/*
 * Mean and deviation come from a library that adds with compensation and takes the deviation in a second pass
 * over the differences from the mean, so nearly equal large values keep their digits. Its normal distribution
 * is a coarse table; that of the other library is good to the last digits.
 */

/** Mean of one value or more, in their unit. */
export function mean(xs: readonly number[]): number {
  requireValues(xs, 1);
  return meanOf([...xs]);
}

/** Sample standard deviation (divided by n − 1) of two values or more, in their unit. */
export function sampleSd(xs: readonly number[]): number {
  requireValues(xs, 2);
  return sampleStandardDeviation([...xs]);
}

/** The largest value less the smallest, taken on their decimal text, in their unit. */
export function range(xs: readonly number[]): number {
  requireValues(xs, 1);
  const [smallest, largest] = xs.reduce(
    ([least, most], x) => [Math.min(least, x), Math.max(most, x)],
    [Infinity, -Infinity],
  );
  return exactToNumber(subtractExact(exactOf(largest), exactOf(smallest)));
}

/**
 * Capability: how often six standard deviations fit between the limits (all in one unit). Describes how a
 * workshop's readings lie, and judges none of them. Refuses a deviation of zero. Source: ISO 22514-2.
 */
export function cp(process: { low: number; high: number; sd: number }): number {
  requireLimits(process);
  requirePositive(process.sd, 'standard deviation');
  return (process.high - process.low) / (6 * process.sd);
}

/**
 * Capability of a process that may be off centre: the distance of its mean to the nearer limit over three
 * standard deviations; negative where the mean lies outside. At most `cp`. Source: ISO 22514-2.
 */
export function cpk(process: { low: number; high: number; mean: number; sd: number }): number {
  const { low, high, sd } = process;
  requireLimits(process);
  requireFinite(process.mean, 'mean');
  requirePositive(sd, 'standard deviation');
  return Math.min(high - process.mean, process.mean - low) / (3 * sd);
}

/**
 * The probability (0 to 1) that the true value lies within its limits, for a measured value with a standard
 * uncertainty (all in one unit, errors normally distributed). One limit may be left out. Tells how sure a
 * verdict is; the verdict itself is `judge`. Source: JCGM 106:2012 clause 7.
 */
export function conformityProbability(reading: {
  value: number;
  standardUncertainty: number;
  low?: number | undefined;
  high?: number | undefined;
}): number {
  const { value, standardUncertainty, low = -Infinity, high = Infinity } = reading;
  requireFinite(value, 'value');
  requirePositive(standardUncertainty, 'standard uncertainty');
  if (reading.low !== undefined) requireFinite(low, 'low limit');
  if (reading.high !== undefined) requireFinite(high, 'high limit');
  if (!Number.isFinite(low) && !Number.isFinite(high)) throw new RangeError('At least one limit is needed.');
  requireOrder(low, high);
  const below = (limit: number): number => normalCdf(limit, value, standardUncertainty);
  const above = (limit: number): number => normalCdf(value, limit, standardUncertainty);
  // Taken on the side of the value's own tail, where the difference keeps its digits.
  return value < low ? above(low) - above(high) : below(high) - below(low);
}

function requireValues(xs: readonly number[], least: number): void {
  if (xs.length < least) throw new RangeError(`At least ${least === 1 ? 'one value' : 'two values'} needed.`);
  for (const x of xs) requireFinite(x, 'value');
}

function requireLimits({ low, high }: { low: number; high: number }): void {
  requireFinite(low, 'low limit');
  requireFinite(high, 'high limit');
  requireOrder(low, high);
}

function requireOrder(low: number, high: number): void {
  if (low >= high) throw new RangeError('The low limit must be below the high limit.');
}
