/*
 * One ECDSA P-256 key a person and tablet, whose private half never leaves this browser. Every entry is
 * signed with its author's key as it is made, so that authorship needs no session later.
 */
import { toBase64url } from '@/domain/base64url';
import { authorKeyId, authorMessage } from '@/domain/trail-hash';
import type { AuthorKeyRow } from './database';
import { sha256OfBytes } from './hashing';

const CURVE = { name: 'ECDSA', namedCurve: 'P-256' } as const;
const SIGNING = { name: 'ECDSA', hash: 'SHA-256' } as const;

/** A new key, with its public half as the raw 65-byte point. */
export async function newAuthorKey(
  subtle: SubtleCrypto,
): Promise<Pick<AuthorKeyRow, 'id' | 'publicKey' | 'pair'>> {
  const pair = await subtle.generateKey(CURVE, false, ['sign', 'verify']);
  const point = new Uint8Array(await subtle.exportKey('raw', pair.publicKey));
  return { id: authorKeyId(point, sha256OfBytes), publicKey: toBase64url(point), pair };
}

/** Signs the ASCII bytes of a content hash; raw r and s, base64url. */
export async function signContent(
  subtle: SubtleCrypto,
  key: Pick<AuthorKeyRow, 'pair'>,
  contentHash: string,
): Promise<string> {
  const bytes = await subtle.sign(SIGNING, key.pair.privateKey, authorMessage(contentHash));
  return toBase64url(new Uint8Array(bytes));
}
