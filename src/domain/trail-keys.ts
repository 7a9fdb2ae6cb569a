import type { TrailChecks } from './trail-checks';
import { requireBytes, requireWhole, type TrailExport } from './trail-export';
import { keyMessage } from './trail-hash';

/*
 * The keys that a workshop has signed with. Each new one is signed by the one before it, so that whoever holds
 * the fingerprint of an old key can follow the way to the present one.
 */

/** The workshop's keys by their fingerprints, the oldest first. */
export type WorkshopKeys = ReadonlyMap<string, Uint8Array<ArrayBuffer>>;

/** Every key follows from the one before it, and the last is the one that the export is signed with. */
export async function verifyWorkshopKeys(
  { publicKey, body: { workshopKeys } }: TrailExport,
  { sha256, verifyEd25519 }: Pick<TrailChecks, 'sha256' | 'verifyEd25519'>,
): Promise<WorkshopKeys> {
  const keys = new Map<string, Uint8Array<ArrayBuffer>>();
  let before: { key: string; bytes: Uint8Array<ArrayBuffer> } | undefined;
  for (const { signedBefore, ...named } of workshopKeys) {
    const at = `the workshop's key ${named.key}`;
    const bytes = requireBytes(named.publicKey, 32, at);
    requireWhole(sha256(bytes) === named.key, at, 'Its name is not that of its content.');
    requireWhole(!keys.has(named.key), at, 'It is there twice.');
    const isFirst = before === undefined;
    requireWhole(isFirst === (signedBefore === null), at, 'It is not signed by the key before it.');
    if (before !== undefined && signedBefore !== null) {
      const message = keyMessage({ ...named, before: before.key });
      const holds = await verifyEd25519(before.bytes, message, requireBytes(signedBefore, 64, at));
      requireWhole(holds, at, 'The signature of the key before it does not hold.');
    }
    keys.set(named.key, bytes);
    before = { key: named.key, bytes };
  }
  const isLast = workshopKeys.at(-1)?.publicKey === publicKey;
  requireWhole(isLast, "the workshop's key", 'It is not the last of the keys that the file names.');
  return keys;
}

/** Compares with the fingerprint that the reader has from elsewhere; an earlier key leads to the present one. */
export function compareKey(keys: WorkshopKeys, present: string, held: string | undefined): string[] {
  if (held === undefined) return ['Key not compared.'];
  requireWhole(keys.has(held), "the workshop's key", 'It is not the key whose fingerprint you hold.');
  return held === present ? [] : ['The key that you hold is an earlier one; it signed the way to this one.'];
}
