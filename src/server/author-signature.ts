import { createPublicKey, type KeyObject, verify } from 'node:crypto';

const KEPT = 500;
const keys = new Map<string, KeyObject>();

/** Whether an author's key signed an entry: P-256 over the letters of its content hash, `r || s`, base64url. */
export function isSignedBy(publicKey: string, contentHash: string, signature: string): boolean {
  const bytes = signatureBytes(signature);
  return bytes !== undefined && verify('sha256', Buffer.from(contentHash, 'ascii'), keyFor(publicKey), bytes);
}

/** The same beside other work, on one of the threads that Node keeps for this. */
export function proveSignature(publicKey: string, contentHash: string, signature: string): Promise<boolean> {
  const bytes = signatureBytes(signature);
  if (bytes === undefined) return Promise.resolve(false);
  return new Promise((resolve, reject) => {
    verify('sha256', Buffer.from(contentHash, 'ascii'), keyFor(publicKey), bytes, (error, holds) =>
      error === null ? resolve(holds) : reject(error),
    );
  });
}

/** One signature has one spelling: the unused bits of its last letter are no place to hide anything. */
function signatureBytes(signature: string): Buffer | undefined {
  const bytes = Buffer.from(signature, 'base64url');
  return bytes.length === 64 && bytes.toString('base64url') === signature ? bytes : undefined;
}

function keyFor(publicKey: string): { key: KeyObject; dsaEncoding: 'ieee-p1363' } {
  return { key: keyObject(publicKey), dsaEncoding: 'ieee-p1363' };
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
