import { mkdtempSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { type Keys, openKeys } from './keys';
import { openSealed, type Sealed, sealingSuite } from './sealing';

let folder = '';
beforeEach(() => {
  folder = mkdtempSync(path.join(tmpdir(), 'witnessmark-keys-'));
});
afterEach(() => rmSync(folder, { recursive: true, force: true }));

async function seal(keys: Keys, pin: string, associated: string): Promise<Sealed> {
  const suite = sealingSuite();
  const { id, publicKey } = keys.sealing.current;
  const bytes = (text: string) => new Uint8Array(Buffer.from(text)).buffer;
  const recipientPublicKey = await suite.kem.deserializePublicKey(
    new Uint8Array(Buffer.from(publicKey, 'base64url')).buffer,
  );
  const sender = await suite.createSenderContext({ recipientPublicKey });
  const ciphertext = await sender.seal(bytes(pin), bytes(associated));
  const text = (buffer: ArrayBuffer) => Buffer.from(buffer).toString('base64url');
  return { keyId: id, enc: text(sender.enc), ciphertext: text(ciphertext) };
}

describe('a sealed PIN', () => {
  it('is opened for the entry that it was sealed for, also after a restart', async () => {
    const sealed = await seal(openKeys(folder, '2031-05-06T07:00:00.000Z'), '418306', 'entry.digest');
    const again = openKeys(folder, '2031-05-07T07:00:00.000Z');
    expect(await openSealed(again, sealed, 'entry.digest')).toBe('418306');
  });

  it('does not open for another entry, altered, or under an unknown key', async () => {
    const keys = openKeys(folder, '2031-05-06T07:00:00.000Z');
    const sealed = await seal(keys, '418306', 'entry.digest');
    const first = sealed.ciphertext.startsWith('A') ? 'B' : 'A';
    const bad: [Sealed, string][] = [
      [sealed, 'another.digest'],
      [{ ...sealed, ciphertext: first + sealed.ciphertext.slice(1) }, 'entry.digest'],
      [{ ...sealed, enc: 'AAAA' }, 'entry.digest'],
      [{ ...sealed, keyId: '0'.repeat(16) }, 'entry.digest'],
    ];
    for (const [altered, associated] of bad) {
      await expect(openSealed(keys, altered, associated)).rejects.toMatchObject({
        code: 'invalid-field',
        field: 'pin',
      });
    }
  });
});

describe('the workshop’s keys', () => {
  it('lie in files that only the server may read', () => {
    openKeys(folder, '2031-05-06T07:00:00.000Z');
    for (const name of ['sealing.json', 'head.json', 'sign-in.json']) {
      expect(statSync(path.join(folder, 'keys', name)).mode & 0o777, name).toBe(0o600);
    }
    expect(statSync(path.join(folder, 'keys')).mode & 0o777).toBe(0o700);
  });
});
