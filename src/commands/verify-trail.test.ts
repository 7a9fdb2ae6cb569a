import { createHash } from 'node:crypto';
import { mkdirSync, mkdtempSync, rmSync, truncateSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { buildTrailBody, rechain, seal, signAsAuthor } from '../../tests/support/sealed-trail';
import { main } from './verify-trail';

let folder: string;

beforeEach(() => {
  folder = mkdtempSync(path.join(tmpdir(), 'witnessmark-verify-'));
});

afterEach(() => rmSync(folder, { recursive: true, force: true }));

/** The exit code, and what was said. */
async function verify(...args: string[]): Promise<{ code: number; said: string }> {
  const said = vi.mocked(console.error).mockImplementation(() => undefined);
  const code = await main(args, folder);
  return { code, said: String(said.mock.lastCall?.[0]) };
}

function file(content: string | Uint8Array): string {
  writeFileSync(path.join(folder, 'given'), content);
  return 'given';
}

describe('the command that verifies a trail', () => {
  it.each([
    ['nothing', ''],
    ['zero bytes', Buffer.alloc(100_000)],
    ['bytes that are no text', Buffer.from([0xff, 0xd8, 0xff, 0xe0, 0x00])],
    ['half of UTF-16', Buffer.from('\ufeff{"body":{}}', 'utf16le')],
    ['text', 'not a trail'],
    ['JSON of something else', '[1,2,3]'],
    ['null', 'null'],
    ['brackets without end', '['.repeat(1_000_000)],
    ['a body of something else', '{"body":{"format":"another"}}'],
    ['a body that is no object', '{"body":7}'],
  ])('says of %s that it is no trail, without a trace of its own insides', async (_, content) => {
    const { code, said } = await verify(file(content));
    expect(code).toBe(2);
    expect(said).toMatch(/^Not a trail: given\n\S/);
    expect(said).not.toMatch(/\n\s+at |Error:|node_modules/);
  });

  it.each([
    ['cut off', '{"body":{"format":"witnessmark-trail","entries":['],
    ['without its parts', '{"body":{"format":"witnessmark-trail"},"publicKey":"","signature":""}'],
    ['with a key twice', '{"body":{"format":"witnessmark-trail","format":"witnessmark-trail"}}'],
    ['with half a character', '{"body":{"format":"witnessmark-trail","v":"\\ud800"}}'],
    ['with a fraction', '{"body":{"format":"witnessmark-trail","v":1.5}}'],
    [
      'nested without end',
      `{"body":{"format":"witnessmark-trail","v":${'['.repeat(5000)}${']'.repeat(5000)}}}`,
    ],
    ['with a byte order mark', '\ufeff{"body":{"format":"witnessmark-trail"}}'],
  ])('says of a trail %s that it is broken, and where', async (_, content) => {
    const { code, said } = await verify(file(content));
    expect(code).toBe(1);
    expect(said).toMatch(/^Broken: given\nAt .+: .+/);
    expect(said).not.toMatch(/\n\s+at |Error:|node_modules/);
  });

  it('reads neither a folder, nor what is no file, nor more than any trail has', async () => {
    mkdirSync(path.join(folder, 'sub'));
    expect(await verify('sub')).toEqual({ code: 2, said: 'sub could not be read: it is a folder.' });
    expect(await verify('/dev/zero')).toEqual({
      code: 2,
      said: '/dev/zero could not be read: it is no file.',
    });
    expect(await verify('absent')).toEqual({
      code: 2,
      said: 'absent could not be read: there is no such file.',
    });
    const huge = file('');
    truncateSync(path.join(folder, huge), 5_000_000_000);
    expect(await verify(huge)).toEqual({
      code: 2,
      said: 'given could not be read: it is larger than any trail.',
    });
  });

  it('takes a hundred megabytes of nothing in its stride', async () => {
    const large = file('');
    truncateSync(path.join(folder, large), 100_000_000);
    expect(await verify(large)).toMatchObject({ code: 2 });
  }, 30_000);
});

describe('the photographs beside a trail', () => {
  const picture = Buffer.from('an invented picture');
  const hash = createHash('sha256').update(picture).digest('hex');

  /** A whole trail that names the picture, and a folder for it. */
  function trail(): string {
    const body = buildTrailBody(12);
    body.entries[2]!.recorded.data = { photo: hash, bytes: picture.length };
    body.photographs = [{ hash, bytes: picture.length, state: 'kept' }];
    rechain(body);
    for (const entry of body.entries) if (entry.recorded.by !== 'workshop') signAsAuthor(entry);
    mkdirSync(path.join(folder, 'pictures'));
    return file(seal(body));
  }

  async function verifyWhole(...args: string[]): Promise<{ code: number; said: string }> {
    const log = vi.spyOn(console, 'log').mockImplementation(() => undefined);
    const code = await main(args, folder);
    const said = String(log.mock.lastCall?.[0]);
    log.mockRestore();
    return { code, said };
  }

  it('are compared by their bytes, with an ending or without', async () => {
    const given = trail();
    writeFileSync(path.join(folder, 'pictures', `${hash}.webp`), picture);
    const { code, said } = await verifyWhole(given, '--photographs', 'pictures');
    expect(code).toBe(0);
    expect(said).toContain('1 photographs compared.');
  });

  it('are missing without a break, and broken when a byte was changed', async () => {
    const given = trail();
    const without = await verifyWhole(given, '--photographs', 'pictures');
    expect(without.code).toBe(0);
    expect(without.said).toContain(`Photograph ${hash} is not in the folder.`);
    writeFileSync(path.join(folder, 'pictures', hash), 'An invented picture');
    expect(await verify(given, '--photographs', 'pictures')).toMatchObject({
      code: 1,
      said: expect.stringContaining(`At photograph ${hash}`),
    });
    expect(await verify(given, '--photographs', 'nowhere')).toMatchObject({ code: 2 });
  });
});
