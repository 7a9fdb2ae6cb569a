import { roundToStep } from '@/domain/units';

const FIGURES = 5;

/** A number to five figures, in digits that can be read off a wrench: no exponent, no zeros at its end. */
export function figureText(value: number): string {
  if (value === 0) return '0';
  const places = FIGURES - 1 - Math.floor(Math.log10(Math.abs(value)));
  if (places <= 0) return String(roundToStep(value, 10 ** -places));
  const text = roundToStep(value, Number(`1e-${places}`)).toFixed(Math.min(places, 100));
  return text.includes('.') ? text.replace(/\.?0+$/, '') : text;
}
