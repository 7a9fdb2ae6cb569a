import { Aes128Gcm, CipherSuite, DhkemP256HkdfSha256, HkdfSha256 } from '@hpke/core';
import { AppError } from './errors';
import type { Keys } from './keys';

/** A secret sealed by RFC 9180 (base mode) to one of the workshop's sealing keys; all of it base64url. */
export interface Sealed {
  keyId: string;
  /** The encapsulated key. */
  enc: string;
  ciphertext: string;
}

/** DHKEM(P-256, HKDF-SHA256), HKDF-SHA256, AES-128-GCM: what the tablets seal with too. */
export function sealingSuite(): CipherSuite {
  return new CipherSuite({ kem: new DhkemP256HkdfSha256(), kdf: new HkdfSha256(), aead: new Aes128Gcm() });
}

/**
 * Opens what a tablet sealed, with the key it names; older keys are kept for tablets that were away.
 *
 * The associated data binds it to its entry. Sealed for something else, or altered, it does not open.
 */
export async function openSealed(
  keys: Keys,
  sealed: Sealed,
  associated: string | Uint8Array,
): Promise<string> {
  const key = keys.sealing.all.get(sealed.keyId);
  if (key === undefined) throw cannotOpen(undefined);
  const suite = sealingSuite();
  try {
    const privateKey = await suite.kem.deserializePrivateKey(
      toBuffer(Buffer.from(key.privateKey, 'base64url')),
    );
    const opened = await suite.open(
      { recipientKey: privateKey, enc: toBuffer(Buffer.from(sealed.enc, 'base64url')) },
      toBuffer(Buffer.from(sealed.ciphertext, 'base64url')),
      toBuffer(typeof associated === 'string' ? Buffer.from(associated) : associated),
    );
    return new TextDecoder('utf-8', { fatal: true }).decode(opened);
  } catch (cause) {
    throw cannotOpen(cause);
  }
}

function cannotOpen(cause: unknown): AppError {
  return new AppError(
    'invalid-field',
    'The sealed PIN cannot be opened: it was sealed to another key or for another entry. Sign again.',
    { field: 'pin', cause },
  );
}

function toBuffer(bytes: Uint8Array): ArrayBuffer {
  return new Uint8Array(bytes).buffer;
}
