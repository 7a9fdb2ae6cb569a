import { fromBase64url, toBase64url } from '@/domain/base64url';
import { bytesOf } from '@/domain/canonical';
import type { SealedPin, WorkshopRow } from './database';

/**
 * Seals a PIN to the server's key (RFC 9180, base mode), bound to the entry's id and to the digest of what
 * is signed, so that it opens for that entry alone. The library is loaded when the first PIN is sealed.
 */
export async function sealPin(
  pin: string,
  to: WorkshopRow['sealingKey'],
  bound: { entryId: string; digest: string },
): Promise<SealedPin> {
  const { Aes128Gcm, CipherSuite, DhkemP256HkdfSha256, HkdfSha256 } = await import('@hpke/core');
  const suite = new CipherSuite({
    kem: new DhkemP256HkdfSha256(),
    kdf: new HkdfSha256(),
    aead: new Aes128Gcm(),
  });
  const recipientPublicKey = await suite.kem.importKey('raw', fromBase64url(to.publicKey).buffer, true);
  const sender = await suite.createSenderContext({ recipientPublicKey });
  const ciphertext = await sender.seal(
    bytesOf(pin).buffer,
    bytesOf(`${bound.entryId}.${bound.digest}`).buffer,
  );
  return {
    keyId: to.id,
    enc: toBase64url(new Uint8Array(sender.enc)),
    ciphertext: toBase64url(new Uint8Array(ciphertext)),
  };
}
