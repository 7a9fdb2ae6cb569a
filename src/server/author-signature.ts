import { createPublicKey, type KeyObject, verify } from 'node:crypto';

const KEPT = 500;
const keys = new Map<string, KeyObject>();

/** Whether an author's key signed an entry: P-256 over the letters of its content hash, `r || s`, base64url. */
export function isSignedBy(publicKey: string, contentHash: string, signature: string): boolean {
  const bytes = Buffer.from(signature, 'base64url');
  // One signature has one spelling: the unused bits of its last letter are no place to hide anything.
  if (bytes.length !== 64 || bytes.toString('base64url') !== signature) return false;
  return verify(
    'sha256',
    Buffer.from(contentHash, 'ascii'),
    { key: keyObject(publicKey), dsaEncoding: 'ieee-p1363' },
    bytes,
  );
}

function keyObject(publicKey: string): KeyObject {
  const held = keys.get(publicKey);
  if (held !== undefined) return held;
  const point = Buffer.from(publicKey, 'base64url');
  const made = createPublicKey({
    key: {
      kty: 'EC',
      crv: 'P-256',
      x: point.subarray(1, 33).toString('base64url'),
      y: point.subarray(33).toString('base64url'),
    },
    format: 'jwk',
  });
  if (keys.size >= KEPT) keys.clear();
  keys.set(publicKey, made);
  return made;
}
