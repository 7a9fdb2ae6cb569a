import { exactOf, exactToNumber, roundExact } from '@/domain/decimal';

/*
 * Every factor is exact: a fraction of whole numbers by definition (inch 25.4 mm, pound 0.45359237 kg,
 * standard gravity 9.80665 m/s², US gallon 231 in³, imperial gallon 4.54609 L; NIST SP 811 appendix B.8).
 * Only the radian is not a fraction.
 */

type Quantity = 'torque' | 'length' | 'angle' | 'temperature' | 'pressure' | 'distance' | 'volume' | 'force';

interface Scale {
  readonly quantity: Quantity;
  /** One of this unit is over / under of the quantity's base unit. */
  readonly over: number;
  readonly under: number;
  /** What the unit reads where the base unit reads 0. */
  readonly zero?: number;
}

const SCALES = {
  'N·m': { quantity: 'torque', over: 1, under: 1 },
  'lbf·ft': { quantity: 'torque', over: 3_389_544_870_828_501, under: 2_500_000_000_000_000 },
  'lbf·in': { quantity: 'torque', over: 1_129_848_290_276_167, under: 10_000_000_000_000_000 },
  'kgf·m': { quantity: 'torque', over: 980_665, under: 100_000 },
  mm: { quantity: 'length', over: 1, under: 1 },
  µm: { quantity: 'length', over: 1, under: 1000 },
  in: { quantity: 'length', over: 254, under: 10 },
  thou: { quantity: 'length', over: 254, under: 10_000 },
  deg: { quantity: 'angle', over: 1, under: 1 },
  rad: { quantity: 'angle', over: 180, under: Math.PI },
  '°C': { quantity: 'temperature', over: 1, under: 1, zero: 0 },
  '°F': { quantity: 'temperature', over: 5, under: 9, zero: 32 },
  kPa: { quantity: 'pressure', over: 1, under: 1 },
  bar: { quantity: 'pressure', over: 100, under: 1 },
  psi: { quantity: 'pressure', over: 44_482_216_152_605, under: 6_451_600_000_000 },
  km: { quantity: 'distance', over: 1, under: 1 },
  mi: { quantity: 'distance', over: 1_609_344, under: 1_000_000 },
  L: { quantity: 'volume', over: 1, under: 1 },
  'US qt': { quantity: 'volume', over: 946_352_946, under: 1_000_000_000 },
  'imp qt': { quantity: 'volume', over: 11_365_225, under: 10_000_000 },
  N: { quantity: 'force', over: 1, under: 1 },
  kN: { quantity: 'force', over: 1000, under: 1 },
  lbf: { quantity: 'force', over: 44_482_216_152_605, under: 10_000_000_000_000 },
} as const satisfies Record<string, Scale>;

const ABSOLUTE_ZERO: Partial<Record<Unit, number>> = { '°C': -273.15, '°F': -459.67 };

/** Every unit that a workshop tool or scale may be marked in. */
export type Unit = keyof typeof SCALES;

/** All the units, in the order in which a list should show them. */
export const UNITS = Object.keys(SCALES) as readonly Unit[];

/** Tells whether a text is a unit that `convert` knows. */
export function isUnit(text: string): text is Unit {
  return Object.hasOwn(SCALES, text);
}

/** Tells whether two units measure the same thing. */
export function measureTheSame(a: Unit, b: Unit): boolean {
  return scaleOf(a).quantity === scaleOf(b).quantity;
}

/**
 * Converts a value between two units of the same quantity by exact factors (NIST SP 811 appendix B.8). Any
 * finite value, differences and left-hand torques included; temperatures not below absolute zero.
 */
export function convert(value: number, from: Unit, to: Unit): number {
  if (!Number.isFinite(value)) throw new RangeError('The value to convert must be a finite number.');
  const [source, target] = [scaleOf(from), scaleOf(to)];
  if (source.quantity !== target.quantity) {
    throw new RangeError(`${from} measures ${source.quantity}, ${to} measures ${target.quantity}.`);
  }
  if (value < (ABSOLUTE_ZERO[from] ?? Number.NEGATIVE_INFINITY)) {
    throw new RangeError(`${value} ${from} is below absolute zero.`);
  }
  if (from === to) return value;
  const size = (value - (source.zero ?? 0)) * (source.over * target.under);
  return size / (source.under * target.over) + (target.zero ?? 0);
}

/**
 * The multiple of `step` nearest to `value`, in the unit of both. A tie, judged on the decimal text of the two
 * numbers, goes to the even multiple; negative values mirror positive ones (ISO 80000-1:2009 annex B, rule A).
 */
export function roundToStep(value: number, step: number): number {
  if (!Number.isFinite(value)) throw new RangeError('The value to round must be a finite number.');
  if (!Number.isFinite(step) || step <= 0)
    throw new RangeError('The rounding step must be greater than zero.');
  return exactToNumber(roundExact(exactOf(value), exactOf(step)));
}

function scaleOf(unit: Unit): Scale {
  if (!isUnit(unit)) throw new RangeError(`"${String(unit)}" is not a unit that is known here.`);
  return SCALES[unit];
}
