import { convert, isUnit, roundToStep, type Unit } from './units';

/** Whether a workshop shows a second unit beside SI. */
export const SECOND_UNITS = ['none', 'inch and pound'] as const;
export type SecondUnits = (typeof SECOND_UNITS)[number];

/** What a value in SI is shown in beside it, and to which step: about as fine as a tool is marked. */
const BESIDE: Partial<Record<Unit, { unit: Unit; step: number; places: number }>> = {
  'N·m': { unit: 'lbf·ft', step: 0.1, places: 1 },
  mm: { unit: 'in', step: 0.0001, places: 4 },
  µm: { unit: 'thou', step: 0.01, places: 2 },
  '°C': { unit: '°F', step: 1, places: 0 },
  bar: { unit: 'psi', step: 1, places: 0 },
  kPa: { unit: 'psi', step: 1, places: 0 },
  km: { unit: 'mi', step: 0.1, places: 1 },
  L: { unit: 'US qt', step: 0.1, places: 1 },
  N: { unit: 'lbf', step: 1, places: 0 },
  kN: { unit: 'lbf', step: 10, places: 0 },
};

/**
 * A value in SI in the unit that is shown beside it, as "29.5 lbf·ft"; undefined where the workshop shows none, or
 * there is none of that kind. For reading alone: what is set, judged and recorded is the value in SI.
 */
export function besideSI(shown: SecondUnits | undefined, value: string, unit: string): string | undefined {
  const beside = shown === 'inch and pound' && isUnit(unit) ? BESIDE[unit] : undefined;
  if (beside === undefined || !isUnit(unit) || !/^-?\d+(\.\d+)?$/.test(value)) return undefined;
  const converted = roundToStep(convert(Number(value), unit, beside.unit), beside.step);
  return `${converted.toFixed(beside.places)} ${beside.unit}`;
}
