import { assertHashable } from '@/domain/canonical';
import { type Entry, parseEntry } from '@/domain/entry';
import { sha256Hex } from './crypto';
import { type CanonicalField, canonicalFields, canonicalText } from './recorded-text';
import { type Carried, carriedSchema } from './sync-body';

/** One pushed entry as far as it could be read; never thrown away, whatever it is. */
export interface ReadItem {
  /** Its place in the push, and so in the answer. */
  index: number;
  id: string | null;
  job: string | null;
  device: string | null;
  deviceSeq: number | null;
  by: string | null;
  contentHash: string;
  /** What came, as text, without the sealed PIN; written only if it is to be kept. */
  text: () => string;
  carried: Carried | undefined;
  read:
    | { ok: true; entry: Entry; fields: readonly CanonicalField[] }
    | { ok: false; newer: true }
    | { ok: false; newer: false; why: string };
}

const UUID = /^[0-9a-f]{8}-[0-9a-f]{4}-[1-8][0-9a-f]{3}-[89ab][0-9a-f]{3}-[0-9a-f]{12}$/;

/** Reads one pushed entry of unknown origin; never throws. */
export function readItem(input: unknown, index: number): ReadItem {
  const carried = carriedSchema.safeParse(input);
  const raw: unknown = isRecord(input) ? input.entry : undefined;
  const known = isRecord(raw) ? raw : {};
  const base = {
    index,
    id: textOf(known.id, 100),
    job: uuidOf(known.job),
    device: uuidOf(known.device),
    deviceSeq: Number.isSafeInteger(known.deviceSeq) ? (known.deviceSeq as number) : null,
    by: typeof known.by === 'string' && /^[\w-]{1,60}$/.test(known.by) ? known.by : null,
    text: () => keepText(input),
  };
  const canonical = canonicalOf(raw);
  const contentHash = sha256Hex(canonical.ok ? canonical.text : base.text());
  const carriedData = carried.success ? carried.data : undefined;
  const parsed = parseEntry(raw);
  if (parsed.ok) {
    const why = canonical.ok
      ? carried.success
        ? whyNoSuchTime(parsed.entry)
        : whyNotCarried(carried.error)
      : canonical.why;
    const read =
      why === undefined
        ? // What came is what was parsed to the letter: the schemas are strict and change nothing.
          ({ ok: true, entry: raw as Entry, fields: canonical.ok ? canonical.fields : [] } as const)
        : ({ ok: false, newer: false, why } as const);
    return { ...base, contentHash, carried: carriedData, read };
  }
  const read = parsed.newer
    ? ({ ok: false, newer: true } as const)
    : ({ ok: false, newer: false, why: `${parsed.field}: ${parsed.why}` } as const);
  return { ...base, contentHash, carried: carriedData, read };
}

function whyNotCarried(error: { issues: readonly { path: PropertyKey[]; message: string }[] }): string {
  const [issue] = error.issues;
  return `${issue?.path.map(String).join('.') || 'entry'}: ${issue?.message ?? 'not readable'}`;
}

/** The form of a time may be right and the day or the hour not there. */
function whyNoSuchTime({ at }: Entry): string | undefined {
  return Number.isNaN(Date.parse(at)) ? `at: there is no such time as ${at}` : undefined;
}

type Canonical = { ok: true; text: string; fields: readonly CanonicalField[] } | { ok: false; why: string };

/** The text that is hashed; what may not be hashed has none. */
function canonicalOf(raw: unknown): Canonical {
  if (!isRecord(raw)) return { ok: false, why: 'entry: missing' };
  try {
    assertHashable(raw);
    const fields = canonicalFields(raw);
    return { ok: true, text: canonicalText(fields), fields };
  } catch (error) {
    if (error instanceof RangeError) return { ok: false, why: `entry: ${error.message}` };
    throw error;
  }
}

/** What came, so that it can be shown and read again; deeper nesting than any writer takes is kept by its end. */
function keepText(input: unknown): string {
  const kept = isRecord(input) ? { ...input, sealed: undefined } : { entry: input };
  try {
    return JSON.stringify(kept);
  } catch (error) {
    if (error instanceof RangeError) return flatten(kept);
    throw error;
  }
}

/** Writes JSON without recursion. */
function flatten(value: unknown): string {
  const parts: string[] = [];
  const open: (string | { value: unknown })[] = [{ value }];
  for (let next = open.pop(); next !== undefined; next = open.pop()) {
    if (typeof next === 'string') {
      parts.push(next);
    } else if (Array.isArray(next.value)) {
      const items = next.value.flatMap((item, index) => [
        ...(index === 0 ? [] : [',']),
        { value: item as unknown },
      ]);
      open.push(']', ...items.reverse(), '[');
    } else if (isRecord(next.value)) {
      const items = Object.entries(next.value).flatMap(([key, item], index) => [
        `${index === 0 ? '' : ','}${JSON.stringify(key)}:`,
        { value: item },
      ]);
      open.push('}', ...items.reverse(), '{');
    } else {
      parts.push(next.value === undefined ? 'null' : JSON.stringify(next.value));
    }
  }
  return parts.join('');
}

function isRecord(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}

function textOf(value: unknown, max: number): string | null {
  return typeof value === 'string' && value.length <= max && value.length > 0 && !/\p{Surrogate}/u.test(value)
    ? value
    : null;
}

function uuidOf(value: unknown): string | null {
  return typeof value === 'string' && UUID.test(value) ? value : null;
}
