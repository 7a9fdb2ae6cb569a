import { createHash, randomBytes, timingSafeEqual } from 'node:crypto';
import serialize from 'canonicalize';

/** SHA-256 in lower-case hex. */
export function sha256Hex(bytes: string | Uint8Array): string {
  return createHash('sha256').update(bytes).digest('hex');
}

/** The RFC 8785 (JCS) form of any JSON value, also of one that may not enter a trail. */
export function canonicalJson(value: unknown): string {
  const text = serialize(value);
  if (text === undefined) throw new TypeError('Only a JSON value has a canonical form.');
  return text;
}

/** A secret that nobody can guess: 32 random bytes, base64url. */
export function newSecret(): string {
  return randomBytes(32).toString('base64url');
}

/** Compares two hex digests without telling by its time where they differ. */
export function isSameDigest(left: string, right: string): boolean {
  const a = Buffer.from(left, 'hex');
  const b = Buffer.from(right, 'hex');
  return a.length === b.length && timingSafeEqual(a, b);
}
