import { hmac } from '@noble/hashes/hmac.js';
import { sha256 } from '@noble/hashes/sha2.js';
import { bytesToHex } from '@noble/hashes/utils.js';
import type { TrailChecks, VerifySignature } from '@/domain/trail-checks';

const ECDSA = { name: 'ECDSA', namedCurve: 'P-256' };

/** The reader's own browser does the checking: nothing of it is asked of the server. */
export function browserChecks(subtle: SubtleCrypto): TrailChecks {
  return {
    sha256: (bytes) => bytesToHex(sha256(bytes)),
    hmacSha256: (key, message) => bytesToHex(hmac(sha256, key, message)),
    verifyEd25519: verifier(
      (key) => subtle.importKey('raw', key, { name: 'Ed25519' }, false, ['verify']),
      (key, signature, message) => subtle.verify({ name: 'Ed25519' }, key, signature, message),
    ),
    verifyP256: verifier(
      (key) => subtle.importKey('raw', key, ECDSA, false, ['verify']),
      (key, signature, message) => subtle.verify({ name: 'ECDSA', hash: 'SHA-256' }, key, signature, message),
    ),
  };
}

type Bytes = Uint8Array<ArrayBuffer>;

/** Imports each key once; a key that can't be one verifies nothing. */
function verifier(
  importKey: (bytes: Bytes) => Promise<CryptoKey>,
  verify: (key: CryptoKey, signature: Bytes, message: Bytes) => Promise<boolean>,
): VerifySignature {
  const keys = new Map<string, Promise<CryptoKey | undefined>>();
  return async (publicKey, message, signature) => {
    const name = bytesToHex(publicKey);
    const key = keys.get(name) ?? importKey(publicKey).catch(keyThatIsNone);
    keys.set(name, key);
    const imported = await key;
    return imported !== undefined && verify(imported, signature, message);
  };
}

function keyThatIsNone(error: unknown): undefined {
  // "Not supported" is the browser's own want and must not read as a broken trail.
  if (error instanceof DOMException && error.name === 'NotSupportedError') throw error;
  return undefined;
}

/** Can this browser check the workshop's key (Ed25519)? */
export async function canCheckHere(subtle: SubtleCrypto): Promise<boolean> {
  try {
    await subtle.importKey('raw', new Uint8Array(32), { name: 'Ed25519' }, false, ['verify']);
    return true;
  } catch (error) {
    return !(error instanceof DOMException && error.name === 'NotSupportedError');
  }
}
