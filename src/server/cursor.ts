import { AppError } from './errors';

/*
 * A list that grows is given a page at a time. The cursor says where the last page ended, by the values that the
 * list is ordered by, so that what is added meanwhile neither repeats a line nor skips one.
 */

/** How many lines a page of a list has. */
export const LIST_PAGE = 50;

// No text holds one once it is encoded.
const SEPARATOR = ',';

/** The cursor after a line whose place is given by these values. */
export function writeCursor(values: readonly string[]): string {
  return values.map(encodeURIComponent).join(SEPARATOR);
}

/** The values of a cursor, as many as the list is ordered by; undefined at the first page. */
export function readCursor<const N extends number>(
  cursor: string | undefined,
  count: N,
): (N extends 1 ? [string] : [string, string]) | undefined {
  if (cursor === undefined) return undefined;
  const values = cursor.split(SEPARATOR).map(decode);
  if (values.length !== count || values.includes('')) throw notThere();
  return values as N extends 1 ? [string] : [string, string];
}

/** Takes the lines of one page off rows that were read with one more than that; the cursor is none at the end. */
export function pageOf<T>(
  rows: readonly T[],
  size: number,
  placeOf: (row: T) => readonly string[],
): { rows: T[]; cursor?: string } {
  const page = rows.slice(0, size);
  const last = page.at(-1);
  return rows.length > size && last !== undefined
    ? { rows: page, cursor: writeCursor(placeOf(last)) }
    : { rows: page };
}

function decode(text: string): string {
  try {
    return decodeURIComponent(text);
  } catch (error) {
    if (error instanceof URIError) throw notThere();
    throw error;
  }
}

function notThere(): AppError {
  return new AppError('invalid-field', 'This page is not there. Begin at the first one.', {
    field: 'cursor',
  });
}
