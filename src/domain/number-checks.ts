/** Refuses what is not greater than zero, or not a finite number; the name goes into the sentence. */
export function requirePositive(value: number, name: string): void {
  if (!Number.isFinite(value) || value <= 0) throw new RangeError(`The ${name} must be greater than zero.`);
}

/** Refuses what is below zero, or not a finite number. */
export function requireNotNegative(value: number, name: string): void {
  if (!Number.isFinite(value) || value < 0) throw new RangeError(`The ${name} must be zero or more.`);
}

/** Refuses what is not a finite number. */
export function requireFinite(value: number, name: string): void {
  if (!Number.isFinite(value)) throw new RangeError(`The ${name} must be a number.`);
}
