/** What a number pad accepts. */
export interface NumberShape {
  kind: 'decimal' | 'integer';
  /** Most characters, the point included. */
  maxLength: number;
}

/** Adds one key to a number as typed so far; the decimal sign is always kept as a point. */
export function typeKey(value: string, key: string, { kind, maxLength }: NumberShape): string {
  if (value.length >= maxLength) return value;
  if (key === '.' || key === ',') {
    if (kind === 'integer' || value.includes('.') || value.length + 2 > maxLength) return value;
    return value === '' ? '0.' : `${value}.`;
  }
  if (!/^\d$/.test(key)) return value;
  return value === '0' ? key : value + key;
}

/** Reads what a keyboard, a scanner or a paste put into the field; what doesn't fit is left out. */
export function readTyped(text: string, shape: NumberShape): string {
  return Array.from(text.trim()).reduce((value, key) => typeKey(value, key, shape), '');
}

/** A number as typed, shown with the decimal sign of the shop. */
export function showTyped(value: string, separator: '.' | ','): string {
  return value.replace('.', separator);
}
