import * as z from 'zod/mini';

/** RFC 3339 in UTC, with one to three decimals or none. */
const FORM = /^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d(\.\d{1,3})?Z$/;

/** A moment as entries and exports carry it: RFC 3339, UTC, and one that there was, so no 30 February. */
export const instant = z
  .string()
  .check(z.refine(isInstant, 'a time in UTC, such as 2026-10-06T09:41:12.345Z'));

/** Whether a text is such a moment. */
export function isInstant(text: string): boolean {
  if (!FORM.test(text)) return false;
  const at = Date.parse(text);
  // A day too many is not refused by the parser but runs on into the next month.
  return !Number.isNaN(at) && new Date(at).toISOString().startsWith(text.slice(0, 19));
}
