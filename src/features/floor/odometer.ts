/* What an odometer may show around a road test. */
import type { StepOf } from '@/domain/plan';
import { convert } from '@/domain/units';

export type DistanceUnit = 'km' | 'mi';

/** A workshop moves a vehicle this far at most before its road test. */
const YARD = 5;
/** A road test may end this much later than asked. */
const LONGER = 5;

/** The distance that a road test asks for, in the unit of the odometer. */
export function distanceIn({ distance, distanceUnit }: StepOf<'drive'>, unit: DistanceUnit): number {
  const asked = Number(distance);
  return distanceUnit === 'mi' || distanceUnit === 'km' ? convert(asked, distanceUnit, unit) : asked;
}

/** The readings that are likely before the road test: what the vehicle came with, and a little more. */
export function likelyBefore(known: string | undefined): string[] {
  return known === undefined ? [] : readingsFrom(Number(known), YARD);
}

/** The readings that are likely after it: the distance that was asked, and a little more. */
export function likelyAfter(step: StepOf<'drive'>, unit: DistanceUnit, from: string): string[] {
  return readingsFrom(Number(from) + Math.ceil(distanceIn(step, unit)), LONGER);
}

function readingsFrom(first: number, more: number): string[] {
  if (!Number.isFinite(first)) return [];
  const whole = Math.floor(first);
  return Array.from({ length: more + 1 }, (_, i) => String(whole + i));
}
