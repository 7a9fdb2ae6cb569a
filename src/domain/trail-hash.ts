import { bytesOf, canonicalJson, hashJson, type Sha256 } from './canonical';

/*
 * What is hashed and what is signed, apart from the verification: a tablet needs the one with every record and
 * the other never.
 */

/** HMAC-SHA-256 of a message under a key as lower-case hex. */
export type HmacSha256 = (key: Uint8Array, message: Uint8Array) => string;

/** The `prev` of a trail's first entry, whose `seq` is 1. */
export const NO_PREVIOUS = '0'.repeat(64);

/** What the server adds to an entry when it records it. */
export const SERVER_FIELDS = ['seq', 'recordedAt', 'prev', 'clockOffsetMs', 'pin', 'conflict'] as const;

/** A field that the server adds to an entry when it records it. */
export type ServerField = (typeof SERVER_FIELDS)[number];

/** The content hash of an entry as its author made it: hex SHA-256 of its canonical form. */
export function contentHash(entry: object, sha256: Sha256): string {
  return hashJson(entry, sha256);
}

/** The chain hash of an entry as the server recorded it; it is the `prev` of the next one. */
export function chainHash(recorded: object, sha256: Sha256): string {
  return hashJson(recorded, sha256);
}

/** What the author made: a recorded entry without the fields that the server added. */
export function contentOf<T extends object>(recorded: T): Omit<T, ServerField> {
  const isServers = (name: string): boolean => (SERVER_FIELDS as readonly string[]).includes(name);
  const kept = Object.entries(recorded).filter(([name]) => !isServers(name));
  return Object.fromEntries(kept) as Omit<T, ServerField>;
}

/** The short name of an author's key: the first 16 hex characters of SHA-256 of its 65-byte point. */
export function authorKeyId(publicKey: Uint8Array, sha256: Sha256): string {
  return sha256(publicKey).slice(0, 16);
}

/** What an author's key signs: the ASCII bytes of the entry's content hash. */
export function authorMessage(content: string): Uint8Array<ArrayBuffer> {
  return bytesOf(content);
}

/** What the workshop's key signs for a head: the canonical form of the head without its signature. */
export function headMessage({
  trail,
  seq,
  hash,
  at,
  key,
}: {
  trail: string;
  seq: number;
  hash: string;
  at: string;
  key: string;
}): Uint8Array<ArrayBuffer> {
  return bytesOf(canonicalJson({ trail, seq, hash, at, key }));
}

/** What a workshop's key signs for the key after it: the canonical form of the new key and of what it follows. */
export function keyMessage({
  key,
  publicKey,
  since,
  before,
}: {
  key: string;
  publicKey: string;
  since: string;
  before: string;
}): Uint8Array<ArrayBuffer> {
  return bytesOf(canonicalJson({ before, key, publicKey, since }));
}

/** What the workshop's key signs for an export: the ASCII bytes of the hex SHA-256 of the body's form. */
export function exportMessage(body: object, sha256: Sha256): Uint8Array<ArrayBuffer> {
  return bytesOf(hashJson(body, sha256));
}

/** What the trail keeps of a value that identifies somebody: HMAC-SHA-256 of its composed text under its salt. */
export function identityCommitment(
  { value, salt }: { value: string; salt: string },
  hmacSha256: HmacSha256,
): string {
  const key = Uint8Array.from(salt.match(/../g) ?? [], (pair) => Number.parseInt(pair, 16));
  return hmacSha256(key, bytesOf(value.normalize('NFC')));
}
