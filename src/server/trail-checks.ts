import { createPublicKey, type KeyObject, verify } from 'node:crypto';
import type { TrailChecks, VerifySignature } from '@/domain/trail-checks';
import { sha256Hex } from './crypto';
import { hmacSha256 } from './job-identity';

/** What a trail is verified with on Node. */
export function nodeChecks(): Pick<TrailChecks, 'sha256' | 'hmacSha256' | 'verifyEd25519' | 'verifyP256'> {
  return {
    sha256: sha256Hex,
    hmacSha256,
    verifyEd25519: verifier(
      (key) => ({ kty: 'OKP', crv: 'Ed25519', x: base64url(key) }),
      (key, message, signature) => verify(null, message, key, signature),
    ),
    verifyP256: verifier(
      (key) => ({
        kty: 'EC',
        crv: 'P-256',
        x: base64url(key.subarray(1, 33)),
        y: base64url(key.subarray(33)),
      }),
      verifyAside,
    ),
  };
}

/** On one of the threads that Node keeps for this: a trail has hundreds of authors' signatures. */
function verifyAside(key: KeyObject, message: Uint8Array, signature: Uint8Array): Promise<boolean> {
  return new Promise((resolve, reject) => {
    verify('sha256', message, { key, dsaEncoding: 'ieee-p1363' }, signature, (error, holds) =>
      error === null ? resolve(holds) : reject(error),
    );
  });
}

/** Reads each key once; bytes that can be no key verify nothing. */
function verifier(
  toJwk: (key: Uint8Array) => Record<string, string>,
  check: (key: KeyObject, message: Uint8Array, signature: Uint8Array) => boolean | Promise<boolean>,
): VerifySignature {
  const keys = new Map<string, KeyObject | undefined>();
  return (publicKey, message, signature) => {
    const name = base64url(publicKey);
    if (!keys.has(name)) keys.set(name, readKey(toJwk(publicKey)));
    const key = keys.get(name);
    return key !== undefined && check(key, message, signature);
  };
}

function readKey(jwk: Record<string, string>): KeyObject | undefined {
  try {
    return createPublicKey({ key: jwk, format: 'jwk' });
  } catch (error) {
    if (error instanceof Error && 'code' in error && String(error.code).startsWith('ERR_')) return undefined;
    throw error;
  }
}

function base64url(bytes: Uint8Array): string {
  return Buffer.from(bytes).toString('base64url');
}
