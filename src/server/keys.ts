import {
  createECDH,
  createHash,
  createPrivateKey,
  createPublicKey,
  generateKeyPairSync,
  type KeyObject,
  sign,
} from 'node:crypto';
import {
  chmodSync,
  closeSync,
  fsyncSync,
  mkdirSync,
  openSync,
  readFileSync,
  renameSync,
  writeSync,
} from 'node:fs';
import path from 'node:path';
import * as z from 'zod';
import { authorKeyId, keyMessage } from '@/domain/trail';
import type { WorkshopKey } from '@/domain/trail-export';
import { newSecret, sha256Hex } from './crypto';

/*
 * The workshop's own keys lie in the data folder, readable by the server alone, never in the database. Old
 * opening keys are kept: a PIN sealed on a tablet that was away for a week must still be opened.
 */

const sealingFile = z.strictObject({
  current: z.string(),
  keys: z
    .array(
      z.strictObject({ id: z.string(), privateKey: z.string(), publicKey: z.string(), madeAt: z.string() }),
    )
    .min(1),
});

const headFile = z.strictObject({
  current: z.string(),
  keys: z
    .array(
      z.strictObject({
        key: z.string(),
        publicKey: z.string(),
        privateKey: z.string(),
        madeAt: z.string(),
        /** The signature of the key before it; the first has none. */
        signedBefore: z.string().nullable().default(null),
      }),
    )
    .min(1),
});

/** A P-256 key that PINs are sealed to; `publicKey` is the raw 65-byte point, base64url. */
export type SealingKey = z.infer<typeof sealingFile>['keys'][number];

/** The Ed25519 key that signs trail heads; `fingerprint` is the hex SHA-256 of the raw public key. */
export interface HeadKey {
  fingerprint: string;
  /** The raw 32-byte public key, base64url. */
  publicKey: string;
  privateKey: KeyObject;
}

export interface Keys {
  signInSecret: string;
  sealing: { current: SealingKey; all: ReadonlyMap<string, SealingKey> };
  head: HeadKey;
  /** Every key that heads were signed with, the oldest first and `head` the last. */
  workshopKeys: WorkshopKey[];
}

/** Reads the workshop's keys from the data folder, making those that are not there yet. */
export function openKeys(dataDir: string, madeAt: string): Keys {
  const folder = path.join(dataDir, 'keys');
  mkdirSync(folder, { recursive: true, mode: 0o700 });
  chmodSync(folder, 0o700);
  const sealing = sealingFile.parse(
    readOrMake(path.join(folder, 'sealing.json'), () => makeSealingFile(madeAt)),
  );
  const head = headFile.parse(readOrMake(path.join(folder, 'head.json'), () => makeHeadFile(madeAt)));
  const secret = z
    .string()
    .min(32)
    .parse(readOrMake(path.join(folder, 'sign-in.json'), newSecret));
  const all = new Map(sealing.keys.map((key) => [key.id, key]));
  const current = all.get(sealing.current);
  const headKey = head.keys.find((key) => key.key === head.current);
  if (current === undefined || headKey === undefined) {
    throw new Error(
      `The key files in ${folder} do not hold the key that they call current. Restore them from the backup.`,
    );
  }
  return {
    signInSecret: secret,
    sealing: { current, all },
    head: toHeadKey(headKey),
    workshopKeys: head.keys.map(({ key, publicKey, madeAt: since, signedBefore }) => ({
      ...{ key, publicKey, since, signedBefore },
    })),
  };
}

/**
 * Makes the workshop a new key for its heads and exports, signed by the one before it, and gives its fingerprint.
 * The server must not be running: it goes on signing with the key that it read at its start.
 */
export function renewHeadKey(dataDir: string, madeAt: string): { before: string; now: string } {
  const file = path.join(dataDir, 'keys', 'head.json');
  const { current, keys } = headFile.parse(JSON.parse(readFileSync(file, 'utf8')));
  const before = keys.find(({ key }) => key === current);
  if (before === undefined) throw new Error(`${file} does not hold the key that it calls current.`);
  const [made] = makeHeadFile(madeAt).keys;
  if (made === undefined) throw new Error('No key was made.');
  const message = keyMessage({ ...made, since: made.madeAt, before: before.key });
  const signed = { ...made, signedBefore: signWithHeadKey(toHeadKey(before), message) };
  writeSecretFile(file, `${JSON.stringify({ current: signed.key, keys: [...keys, signed] })}\n`);
  return { before: before.key, now: signed.key };
}

function toHeadKey({ key, publicKey, privateKey }: z.infer<typeof headFile>['keys'][number]): HeadKey {
  const der = Buffer.from(privateKey, 'base64url');
  const opened = createPrivateKey({ key: der, format: 'der', type: 'pkcs8' });
  return { fingerprint: key, publicKey, privateKey: opened };
}

/** Signs bytes with the head key; the signature is base64url. */
export function signWithHeadKey(key: HeadKey, bytes: string | Uint8Array): string {
  return sign(null, typeof bytes === 'string' ? Buffer.from(bytes) : bytes, key.privateKey).toString(
    'base64url',
  );
}

function makeSealingFile(madeAt: string): z.infer<typeof sealingFile> {
  const pair = createECDH('prime256v1');
  pair.generateKeys();
  // createECDH drops leading zeros of the private scalar; the stored form is always 32 bytes.
  const privateKey = Buffer.concat([Buffer.alloc(32), pair.getPrivateKey()]).subarray(-32);
  const point = pair.getPublicKey();
  const id = authorKeyId(point, sha256Hex);
  return {
    current: id,
    keys: [
      { id, privateKey: privateKey.toString('base64url'), publicKey: point.toString('base64url'), madeAt },
    ],
  };
}

function makeHeadFile(madeAt: string): z.infer<typeof headFile> {
  const { privateKey, publicKey } = generateKeyPairSync('ed25519');
  const raw = rawEd25519(publicKey);
  const fingerprint = createHash('sha256').update(raw).digest('hex');
  const der = privateKey.export({ format: 'der', type: 'pkcs8' }).toString('base64url');
  return {
    current: fingerprint,
    keys: [
      {
        ...{ key: fingerprint, publicKey: raw.toString('base64url') },
        ...{ privateKey: der, madeAt, signedBefore: null },
      },
    ],
  };
}

function rawEd25519(key: KeyObject): Buffer {
  const x = createPublicKey(key.export({ format: 'pem', type: 'spki' })).export({ format: 'jwk' }).x;
  if (x === undefined) throw new Error('This Node cannot export an Ed25519 key.');
  return Buffer.from(x, 'base64url');
}

function readOrMake(file: string, make: () => unknown): unknown {
  try {
    return JSON.parse(readFileSync(file, 'utf8'));
  } catch (error) {
    if (!(error instanceof Error && 'code' in error && error.code === 'ENOENT')) {
      throw new Error(`${file} cannot be read. Restore it from the backup.`, { cause: error });
    }
  }
  const value = make();
  writeSecretFile(file, `${JSON.stringify(value)}\n`);
  return value;
}

/** Written beside and renamed into place, so that a crash leaves either no file or a whole one. */
function writeSecretFile(file: string, text: string): void {
  const beside = `${file}.new`;
  const handle = openSync(beside, 'w', 0o600);
  try {
    writeSync(handle, text);
    fsyncSync(handle);
  } finally {
    closeSync(handle);
  }
  renameSync(beside, file);
}
