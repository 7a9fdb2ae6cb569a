import { canonicalJson } from './crypto';

/*
 * An entry is hashed twice: as its author made it, and with what the server adds. Both forms are put together
 * from the same parts, so that each value is written once.
 */

/** One field of an object in its canonical form. */
export interface CanonicalField {
  name: string;
  text: string;
}

/** The fields of a hashable object, in canonical order. */
export function canonicalFields(value: object): CanonicalField[] {
  return inOrder(
    Object.entries(value).map(([name, item]) => ({
      name,
      text: `${JSON.stringify(name)}:${textOf(item)}`,
    })),
  );
}

/** A plain value is written the same way in every JSON; only objects and lists have an order to keep. */
function textOf(value: unknown): string {
  return typeof value === 'object' && value !== null ? canonicalJson(value) : JSON.stringify(value);
}

/** The canonical form of an object with these fields. */
export function canonicalText(fields: readonly CanonicalField[]): string {
  return `{${fields.map(({ text }) => text).join(',')}}`;
}

/** The canonical form of an object with these fields and a few more. */
export function canonicalTextWith(fields: readonly CanonicalField[], more: object): string {
  return canonicalText(inOrder([...fields, ...canonicalFields(more)]));
}

/** By UTF-16 code units, as RFC 8785 orders names. */
function inOrder(fields: CanonicalField[]): CanonicalField[] {
  return fields.sort((one, other) => (one.name < other.name ? -1 : one.name > other.name ? 1 : 0));
}
