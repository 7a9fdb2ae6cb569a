/*
 * Measured values travel as decimal text ("0.050"), because the trailing zero is part of what was read and
 * because hashed documents hold no fractions. Sums and comparisons are made on that text, exactly: 0.1 + 0.2
 * is 0.3 here.
 */

/** A number as its decimal text says it: units / 10^scale. */
export interface Exact {
  readonly units: bigint;
  readonly scale: number;
}

const DECIMAL = /^-?(?:0|[1-9]\d*)(?:\.\d+)?$/;
const NEGATIVE_ZERO = /^-[0.]+$/;
const NUMBER_TEXT = /^(-?)(\d+)(?:\.(\d+))?(?:e([+-]\d+))?$/;
/** A double keeps every decimal text of so many digits apart. */
const MOST_DIGITS = 15;

/** Tells whether a text is a decimal string as the trail stores it: "12", "-3.5", "0.050"; at most 15 digits. */
export function isDecimal(text: string): boolean {
  return DECIMAL.test(text) && !NEGATIVE_ZERO.test(text) && text.replace(/\D/g, '').length <= MOST_DIGITS;
}

/** Turns what a person typed ("0,050", " .5 ") into the decimal string that is stored, trailing zeros kept. */
export function parseTyped(text: string): string {
  const parts = /^([-\u2212]?)0*(\d*)(?:[.,](\d*))?$/.exec(text.trim());
  const [whole, fraction] = [parts?.[2] ?? '', parts?.[3] ?? ''];
  if (parts === null || !/\d/.test(text)) throw new RangeError(`"${text}" is not a number.`);
  const size = `${whole === '' ? '0' : whole}${fraction === '' ? '' : `.${fraction}`}`;
  const decimal = parts[1] !== '' && /[1-9]/.test(size) ? `-${size}` : size;
  if (!isDecimal(decimal)) throw new RangeError(`"${text}" has more than ${MOST_DIGITS} digits.`);
  return decimal;
}

/** The number that a stored decimal string stands for. */
export function decimalToNumber(decimal: string): number {
  if (!isDecimal(decimal)) throw new RangeError(`"${decimal}" is not a decimal number.`);
  return Number(decimal);
}

/** A number as a decimal string with so many places (0 to 12), ties to the even last digit. */
export function formatDecimal(value: number, places: number): string {
  if (!Number.isInteger(places) || places < 0 || places > 12)
    throw new RangeError('The places must be 0 to 12.');
  return textOf(roundExact(exactOf(value), { units: 1n, scale: places }));
}

/** Compares two decimal strings by value: negative, 0 or positive. "0.05" and "0.050" are equal. */
export function compareDecimals(a: string, b: string): number {
  decimalToNumber(a);
  decimalToNumber(b);
  return compareExact(exactOf(a), exactOf(b));
}

/** Reads a finite number, or a decimal string, as the decimal value that its shortest text shows. */
export function exactOf(value: number | string): Exact {
  const parts = NUMBER_TEXT.exec(String(value));
  if (parts === null) throw new RangeError(`${value} is not a number that can be worked with.`);
  const [, sign, whole, fraction = '', exponent = '0'] = parts;
  const digits = BigInt(`${sign}${whole}${fraction}`);
  const scale = fraction.length - Number(exponent);
  return scale >= 0 ? { units: digits, scale } : { units: digits * 10n ** BigInt(-scale), scale: 0 };
}

/** a + b, exactly. */
export function addExact(a: Exact, b: Exact): Exact {
  const scale = Math.max(a.scale, b.scale);
  return { units: unitsAt(a, scale) + unitsAt(b, scale), scale };
}

/** a − b, exactly. */
export function subtractExact(a: Exact, b: Exact): Exact {
  return addExact(a, { units: -b.units, scale: b.scale });
}

/** Negative, 0 or positive as a is below, equal to or above b. */
export function compareExact(a: Exact, b: Exact): number {
  const { units } = subtractExact(a, b);
  return units < 0n ? -1 : units > 0n ? 1 : 0;
}

/** The nearest multiple of a positive step; ties go to the even multiple (ISO 80000-1:2009 annex B, rule A). */
export function roundExact(value: Exact, step: Exact): Exact {
  const scale = Math.max(value.scale, step.scale);
  const [units, stepUnits] = [unitsAt(value, scale), unitsAt(step, scale)];
  const size = units < 0n ? -units : units;
  const below = size / stepUnits;
  const twiceRest = 2n * (size % stepUnits);
  const isUp = twiceRest > stepUnits || (twiceRest === stepUnits && below % 2n === 1n);
  const multiple = isUp ? below + 1n : below;
  return { units: (units < 0n ? -multiple : multiple) * step.units, scale: step.scale };
}

/** The double nearest to an exact value. */
export function exactToNumber(value: Exact): number {
  return Number(textOf(value));
}

function unitsAt(value: Exact, scale: number): bigint {
  return value.units * 10n ** BigInt(scale - value.scale);
}

function textOf({ units, scale }: Exact): string {
  const digits = (units < 0n ? -units : units).toString().padStart(scale + 1, '0');
  const whole = digits.slice(0, digits.length - scale);
  const text = scale === 0 ? whole : `${whole}.${digits.slice(digits.length - scale)}`;
  return units < 0n ? `-${text}` : text;
}
