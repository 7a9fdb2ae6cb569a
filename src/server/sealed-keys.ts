import { createCipheriv, createDecipheriv, randomBytes, scrypt } from 'node:crypto';
import { promisify } from 'node:util';
import * as z from 'zod';

/*
 * The key files of a data folder under a passphrase, as they travel in a backup: AES-256-GCM, the key by scrypt.
 * Whoever finds the archive can read the records, but can't sign in the workshop's name.
 */

const deriveKey = promisify<
  string,
  Buffer,
  number,
  { N: number; r: number; p: number; maxmem: number },
  Buffer
>(scrypt);

/** About a second and 128 MiB a guess. */
const COST = { N: 2 ** 17, r: 8, p: 1 } as const;
const KEY_BYTES = 32;
const MAX_MEMORY = 512 * 1024 * 1024;

const sealedSchema = z.strictObject({
  v: z.literal(1),
  kdf: z.strictObject({
    name: z.literal('scrypt'),
    // A file from outside must not choose how much memory it takes.
    N: z.literal(COST.N),
    r: z.literal(COST.r),
    p: z.literal(COST.p),
    salt: z.string(),
  }),
  cipher: z.literal('aes-256-gcm'),
  nonce: z.string(),
  tag: z.string(),
  sealed: z.string(),
});

const filesSchema = z.record(z.string().regex(/^[a-z-]+\.json$/), z.string());

/** The passphrase does not open the keys, or they were changed. */
export class WrongPassphraseError extends Error {
  override name = 'WrongPassphraseError';
  readonly code = 'wrong-passphrase';

  constructor(options?: ErrorOptions) {
    super(
      'The passphrase does not open the keys in this backup. Nothing was changed. Try again with the one that it was made with.',
      options,
    );
  }
}

/** Seals files, each a name and its text. */
export async function sealKeyFiles(
  files: Readonly<Record<string, string>>,
  passphrase: string,
): Promise<string> {
  const [salt, nonce] = [randomBytes(16), randomBytes(12)];
  const key = await keyFrom(passphrase, salt);
  const cipher = createCipheriv('aes-256-gcm', key, nonce);
  const sealed = Buffer.concat([cipher.update(JSON.stringify(files), 'utf8'), cipher.final()]);
  return JSON.stringify({
    v: 1,
    kdf: { name: 'scrypt', ...COST, salt: salt.toString('base64url') },
    cipher: 'aes-256-gcm',
    nonce: nonce.toString('base64url'),
    tag: cipher.getAuthTag().toString('base64url'),
    sealed: sealed.toString('base64url'),
  } satisfies z.infer<typeof sealedSchema>);
}

/** Opens sealed files; throws a WrongPassphraseError where the passphrase or the bytes are not right. */
export async function openKeyFiles(text: string, passphrase: string): Promise<Record<string, string>> {
  const { kdf, nonce, tag, sealed } = sealedSchema.parse(JSON.parse(text));
  const bytes = (value: string): Buffer => Buffer.from(value, 'base64url');
  const key = await keyFrom(passphrase, bytes(kdf.salt));
  try {
    const decipher = createDecipheriv('aes-256-gcm', key, bytes(nonce), { authTagLength: 16 });
    decipher.setAuthTag(bytes(tag));
    const opened = Buffer.concat([decipher.update(bytes(sealed)), decipher.final()]);
    return filesSchema.parse(JSON.parse(opened.toString('utf8')));
  } catch (error) {
    throw new WrongPassphraseError({ cause: error });
  }
}

function keyFrom(passphrase: string, salt: Buffer): Promise<Buffer> {
  // One passphrase typed on two keyboards is one passphrase.
  return deriveKey(passphrase.normalize('NFKC'), salt, KEY_BYTES, { ...COST, maxmem: MAX_MEMORY });
}
