import canonicalize from 'canonicalize';

/*
 * Whatever is hashed or signed here has exactly one text: the RFC 8785 form of JSON that holds no numbers but
 * safe integers and no text but NFC. So no two programs can print one value in two ways.
 */

/** SHA-256 of some bytes as lower-case hex; `node:crypto` or a library does it, and it is passed in. */
export type Sha256 = (bytes: Uint8Array) => string;

/** Deeper JSON than any entry, plan or export needs; a bound, so that a hostile file can't exhaust the stack. */
const DEEPEST = 64;
const ASCII = /^[\0-\x7f]*$/;
const LONE_SURROGATE = /\p{Surrogate}/u;
const encoder = new TextEncoder();

/**
 * Refuses what may not be hashed: numbers but safe integers, text that is not NFC or has half a character,
 * undefined, and whatever JSON does not know. The error names the path, such as `data.readings[2].value`.
 */
export function assertHashable(value: unknown): void {
  check(value, '', 0);
}

/** The RFC 8785 (JCS) form of a hashable value. */
export function canonicalJson(value: unknown): string {
  assertHashable(value);
  return canonicalize(value) ?? '';
}

/** The canonical form of an object known to be hashable, and the form without the named fields, at one go. */
export function canonicalWithout(
  value: object,
  fields: ReadonlySet<string>,
): [whole: string, without: string] {
  const parts = Object.entries(value)
    .toSorted(([a], [b]) => (a < b ? -1 : 1))
    .map(([name, item]) => ({ name, text: `${JSON.stringify(name)}:${canonicalize(item) ?? ''}` }));
  const join = (kept: { text: string }[]): string => `{${kept.map(({ text }) => text).join(',')}}`;
  return [join(parts), join(parts.filter(({ name }) => !fields.has(name)))];
}

/** SHA-256 of a hashable value's canonical form, in lower-case hex. */
export function hashJson(value: unknown, sha256: Sha256): string {
  return sha256(bytesOf(canonicalJson(value)));
}

/** The UTF-8 bytes of a text. */
export function bytesOf(text: string): Uint8Array<ArrayBuffer> {
  return encoder.encode(text);
}

function check(value: unknown, path: string, depth: number): void {
  if (typeof value === 'string') checkText(value, path);
  else if (typeof value === 'number') {
    if (!Number.isSafeInteger(value))
      throw refusal(path, `is ${value}, and only whole numbers may be hashed`);
  } else if (value !== null && typeof value === 'object') checkNested(value, path, depth);
  else if (value !== null && typeof value !== 'boolean')
    throw refusal(path, `is ${typeof value}, which JSON does not know`);
}

function checkNested(value: object, path: string, depth: number): void {
  if (depth === DEEPEST) throw refusal(path, 'is nested too deep');
  if (Array.isArray(value)) {
    // A hole in a list is undefined here, and refused as such.
    for (let i = 0; i < value.length; i += 1) check(value[i], `${path}[${i}]`, depth + 1);
    return;
  }
  const prototype: unknown = Object.getPrototypeOf(value);
  if (prototype !== Object.prototype && prototype !== null) throw refusal(path, 'is not plain JSON');
  for (const [key, item] of Object.entries(value)) {
    const itemPath = path === '' ? key : `${path}.${key}`;
    checkText(key, itemPath);
    check(item, itemPath, depth + 1);
  }
}

function checkText(text: string, path: string): void {
  if (ASCII.test(text)) return;
  if (LONE_SURROGATE.test(text)) throw refusal(path, 'has half a character in it');
  if (text !== text.normalize('NFC')) throw refusal(path, 'is not in the composed form (NFC)');
}

function refusal(path: string, why: string): RangeError {
  return new RangeError(`${path === '' ? 'The value' : path} ${why}.`);
}
