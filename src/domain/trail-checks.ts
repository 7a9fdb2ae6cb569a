import type { Sha256 } from './canonical';
import type { HmacSha256 } from './trail-hash';

/**
 * Checks one signature; false for a key or a signature that can not be one, and never an error for them. A key
 * comes as the same array each time within one verification, so what is made of it can be kept by it.
 */
export type VerifySignature = (
  publicKey: Uint8Array<ArrayBuffer>,
  message: Uint8Array<ArrayBuffer>,
  signature: Uint8Array<ArrayBuffer>,
) => boolean | Promise<boolean>;

/** What a verification is done with, and what to compare with if it is at hand from elsewhere. */
export interface TrailChecks {
  /** The hash of a signed head that left the workshop earlier. */
  head?: string | undefined;
  /** The fingerprint of the workshop's key, known from elsewhere. */
  key?: string | undefined;
  sha256: Sha256;
  /** HMAC-SHA-256 as lower-case hex. */
  hmacSha256: HmacSha256;
  verifyEd25519: VerifySignature;
  /** ECDSA P-256 with SHA-256; the key a raw uncompressed point, the signature r and s of 32 bytes each. */
  verifyP256: VerifySignature;
}
