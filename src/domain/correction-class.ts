import type { EntryKind } from './entry';

/** What a correction changes: words and lots, or what was measured, done or fitted. */
export type CorrectionClass = 'clerical' | 'substantive';

/** What may be mended under a signature without opening it again: which packet it was, and words beside the fact. */
const CLERICAL = new Set(['lot', 'threadLot', 'cardLot', 'note', 'reason', 'into']);

/** The class of a change by what it changes, whatever is claimed of it; undefined if it changes nothing. */
export function correctionClass(before: object, after: object): CorrectionClass | undefined {
  if (isSameData(before, after)) return undefined;
  return isSame(before, after, CLERICAL) ? 'clerical' : 'substantive';
}

/** Do two pieces of an entry's data say the same, in whatever order their fields come? */
export function isSameData(one: unknown, other: unknown): boolean {
  return isSame(one, other, NOTHING);
}

const NOTHING: ReadonlySet<string> = new Set();

/** Are the two the same, field by field, these names aside? */
function isSame(one: unknown, other: unknown, aside: ReadonlySet<string>): boolean {
  if (!isObject(one) || !isObject(other)) return one === other;
  if (Array.isArray(one) !== Array.isArray(other)) return false;
  const names = new Set([...Object.keys(one), ...Object.keys(other)]);
  return [...names].every((name) => aside.has(name) || isSame(own(one, name), own(other, name), aside));
}

function isObject(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null;
}

function own(object: Record<string, unknown>, name: string): unknown {
  return Object.hasOwn(object, name) ? object[name] : undefined;
}

/** Kinds whose value can be superseded; every other kind is an act or a judgement. */
export const correctableKinds: ReadonlySet<EntryKind> = new Set<EntryKind>([
  'done',
  'removed',
  'refitted',
  'counted',
  'inspected',
  'read',
  'chose-shells',
  'graded',
  'gauged',
  'tightened',
  'bolt-replaced',
  'fitted',
  'filled',
  'watch-checked',
  'drive-started',
  'drive-ended',
]);
