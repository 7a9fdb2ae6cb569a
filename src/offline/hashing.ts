/* The domain's hashes with the browser's SHA-256: a synchronous one, because folding and writing can't wait. */
import { sha256 } from '@noble/hashes/sha2.js';
import { bytesToHex } from '@noble/hashes/utils.js';
import { hashJson } from '@/domain/canonical';
import type { Entry, Recorded } from '@/domain/entry';
import { chainHash, contentHash, contentOf } from '@/domain/trail-hash';

/** Hex SHA-256 of bytes. */
export function sha256OfBytes(bytes: Uint8Array): string {
  return bytesToHex(sha256(bytes));
}

/** Hex SHA-256 of a document's canonical form; throws a RangeError for what may not be hashed. */
export function documentHash(document: unknown): string {
  return hashJson(document, sha256OfBytes);
}

/** The entry as its author made it, without what the server added. */
export function entryOf(recorded: Recorded): Entry {
  return contentOf(recorded) as Entry;
}

/** What an entry's author signs. */
export function contentHashOf(entry: Entry): string {
  return contentHash(entry, sha256OfBytes);
}

/** What the next entry of the trail names as its `prev`. */
export function chainHashOf(recorded: Recorded): string {
  return chainHash(recorded, sha256OfBytes);
}
