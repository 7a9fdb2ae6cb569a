import { generateKeyPairSync } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { canonicalJson } from '@/domain/canonical';
import { chainHash, contentHash, contentOf, verifyTrail } from '@/domain/trail';
import {
  buildTrailBody,
  fingerprint,
  nodeChecks,
  PHOTO,
  rechain,
  seal,
  sha256,
  workshopKeyOf,
  workshopPair,
} from '../../tests/support/sealed-trail';

const body = buildTrailBody();
const text = seal(body);

/** A small repeatable source of numbers for choosing what to damage (Numerical Recipes' constants). */
function numbersFrom(seed: number): (below: number) => number {
  let state = seed;
  return (below) => {
    state = (Math.imul(state, 1_664_525) + 1_013_904_223) >>> 0;
    return Math.floor((state / 2 ** 32) * below);
  };
}

describe('hashes of entries', () => {
  it('leave what the server added out of the content hash, and nothing else', () => {
    const { recorded } = body.entries[5]!;
    const content = contentOf({ ...recorded, pin: { keyId: 'k' }, conflict: { code: 'c' } });
    expect(Object.keys(recorded).filter((name) => !(name in content))).toEqual([
      ...['seq', 'recordedAt', 'prev', 'clockOffsetMs'],
    ]);
    expect('pin' in content || 'conflict' in content).toBe(false);
    expect(contentHash(content, sha256)).toBe(sha256(Buffer.from(canonicalJson(content))));
    expect(chainHash(recorded, sha256)).toBe(body.entries[5]!.hash);
  });

  it('refuse an entry that could be written in two ways', () => {
    expect(() => contentHash({ data: { clearance: 0.05 } }, sha256)).toThrow('data.clearance is 0.05');
  });
});

describe('verifyTrail on a whole trail', () => {
  it('says what it checked, and that key and head were not compared', async () => {
    expect(await verifyTrail(text, nodeChecks)).toEqual({
      ...{ ok: true, entries: 40, signatures: 36, heads: 2, key: fingerprint, photographs: [PHOTO] },
      ...{ keyCompared: false, headCompared: false },
      notes: ['complaint: erased.', 'Key not compared.', 'Head not compared.'],
      body,
    });
  });

  it('takes the bytes as well as the text', async () => {
    expect((await verifyTrail(Buffer.from(text), nodeChecks)).ok).toBe(true);
  });

  it('compares with the key and the head that the reader holds', async () => {
    const head = body.entries[19]!.hash;
    expect(await verifyTrail(text, { ...nodeChecks, key: fingerprint, head })).toMatchObject({
      ...{ ok: true, keyCompared: true, headCompared: true },
      notes: ['complaint: erased.', '20 more came after the head that you hold.'],
    });
  });

  it('refuses to compare with what is no fingerprint', async () => {
    await expect(verifyTrail(text, { ...nodeChecks, key: 'ABC' })).rejects.toThrow(RangeError);
    await expect(verifyTrail(text, { ...nodeChecks, head: '' })).rejects.toThrow(RangeError);
  });

  it('finds another key and a trail that was cut short', async () => {
    expect(await verifyTrail(text, { ...nodeChecks, key: 'ab'.repeat(32) })).toMatchObject({
      brokenAt: "the workshop's key",
    });
    const short = structuredClone(body);
    short.entries.length = 30;
    short.heads.length = 1;
    expect((await verifyTrail(seal(short), nodeChecks)).ok).toBe(true);
    const held = { ...nodeChecks, head: body.entries[39]!.hash };
    expect(await verifyTrail(seal(short), held)).toMatchObject({ brokenAt: 'the head that you hold' });
  });
});

describe('verifyTrail on a workshop that renewed its key', () => {
  const old = generateKeyPairSync('ed25519');
  const former = workshopKeyOf(old);
  const present = workshopKeyOf(workshopPair, old);
  const renewed = { ...buildTrailBody(), workshopKeys: [former, present] };

  it('follows the way from the key that the reader holds to the present one', async () => {
    expect(await verifyTrail(seal(renewed), { ...nodeChecks, key: former.key })).toMatchObject({
      ok: true,
      key: fingerprint,
      notes: expect.arrayContaining([
        'The key that you hold is an earlier one; it signed the way to this one.',
      ]),
    });
  });

  it.each([
    ['a key that the one before it did not sign', [former, workshopKeyOf(workshopPair)]],
    ['a key signed by another', [former, workshopKeyOf(workshopPair, generateKeyPairSync('ed25519'))]],
    ['keys in another order', [present, former]],
    ['one key twice', [former, present, present]],
    ['another date', [former, { ...present, since: '2030-01-01T08:00:00Z' }]],
    ['a key that does not sign the export', [former]],
  ])('refuses %s', async (_, workshopKeys) => {
    const verdict = await verifyTrail(seal({ ...renewed, workshopKeys }), nodeChecks);
    expect(verdict).toMatchObject({ ok: false, brokenAt: expect.stringMatching(/^the workshop's key/) });
  });
});

describe('verifyTrail on what is not there', () => {
  it('tells a photograph that never came from a broken trail', async () => {
    const photographs = [{ hash: PHOTO, bytes: 182_044, state: 'missing' as const }];
    expect(await verifyTrail(seal({ ...buildTrailBody(), photographs }), nodeChecks)).toMatchObject({
      ...{ ok: true, photographs: [] },
      notes: expect.arrayContaining([`Photograph ${PHOTO} is missing.`]),
    });
  });

  it('takes a field or a photograph as erased only where an entry says so', async () => {
    const silent = buildTrailBody();
    silent.entries[9]!.recorded.data = { fields: [], photographs: [], reason: 'asked for' };
    expect(await verifyTrail(seal(rechain(silent)), nodeChecks)).toMatchObject({
      brokenAt: 'identity: complaint',
    });
    const photographs = [{ hash: PHOTO, bytes: 182_044, state: 'erased' as const }];
    expect(await verifyTrail(seal({ ...buildTrailBody(), photographs }), nodeChecks)).toMatchObject({
      brokenAt: `photograph ${PHOTO}`,
    });
    const told = { ...buildTrailBody(), photographs };
    told.entries[9]!.recorded.data = { fields: ['complaint'], photographs: [PHOTO], reason: 'asked for' };
    expect(await verifyTrail(seal(rechain(told)), nodeChecks)).toMatchObject({ ok: true });
  });

  it.each([
    ['has one that no entry names', [{ hash: 'cd'.repeat(32), bytes: 1, state: 'kept' as const }]],
    ['gives one another size', [{ hash: PHOTO, bytes: 1, state: 'kept' as const }]],
    ['leaves one out', []],
  ])('refuses a list of photographs that %s', async (_, photographs) => {
    const verdict = await verifyTrail(seal({ ...buildTrailBody(), photographs }), nodeChecks);
    expect(verdict).toMatchObject({ ok: false, brokenAt: expect.stringMatching(/^photograph /) });
  });
});

describe('verifyTrail on a damaged file', () => {
  it('notices every one of 300 random changes of a single byte', async () => {
    const below = numbersFrom(20_310_304);
    const bytes = Buffer.from(text);
    const unnoticed: string[] = [];
    for (let i = 0; i < 300; i += 1) {
      const at = below(bytes.length);
      const damaged = Buffer.from(bytes);
      damaged[at] = (damaged[at]! + 1 + below(255)) % 256;
      if ((await verifyTrail(damaged, nodeChecks)).ok)
        unnoticed.push(`${at}: ${damaged.subarray(at - 9, at + 9).toString()}`);
    }
    expect(unnoticed).toEqual([]);
  });

  it('notices a change of any character of the seal itself', async () => {
    const small = seal(buildTrailBody(3));
    const from = small.lastIndexOf('},"publicKey"');
    for (let at = from; at < small.length; at += 1) {
      const other = small[at] === 'A' ? 'B' : 'A';
      expect((await verifyTrail(small.slice(0, at) + other + small.slice(at + 1), nodeChecks)).ok).toBe(
        false,
      );
    }
    expect(small.length - from).toBeGreaterThan(150);
  });

  const NOT_ITS_FORM = 'not the one form that such a file has';
  it.each<[string, string, (whole: string) => string]>([
    ['white space', NOT_ITS_FORM, (whole) => whole.replace('"v":1', '"v": 1')],
    ['a key given twice', NOT_ITS_FORM, (whole) => whole.replace('{"body":', '{"body":0,"body":')],
    ['another escape', NOT_ITS_FORM, (whole) => whole.replace('Wren', '\\u0057ren')],
    ['a line at its end', NOT_ITS_FORM, (whole) => `${whole}\n`],
    [
      'capitals in a hash',
      'hash is not as it must be',
      (whole) => whole.replace(/:"[0-9a-f]{64}"/, (hash) => hash.toUpperCase()),
    ],
    ['a byte order mark', 'can not be read as JSON', (whole) => `\uFEFF${whole}`],
    ['its end cut off', 'can not be read as JSON', (whole) => whole.slice(0, -1)],
  ])('finds it broken with %s', async (_, why, damage) => {
    const damaged = damage(text);
    expect(damaged).not.toBe(text);
    for (const file of [damaged, Buffer.from(damaged)]) {
      const verdict = await verifyTrail(file, nodeChecks);
      expect(verdict).toMatchObject({ ok: false, brokenAt: expect.any(String) as string });
      expect(verdict).toMatchObject({ why: expect.stringContaining(why) as string });
    }
  });

  it('says where an edit was made although the seal is broken too', async () => {
    const edited = text.replace('"clearance":"0.050"', '"clearance":"0.051"');
    expect(await verifyTrail(edited, nodeChecks)).toEqual({
      ...{ ok: false, brokenAt: 'entry 2' },
      why: 'Its content is not what its hash was made of.',
    });
  });

  it.each(['', 'hello', '{}', 'null', '[1]', '{"body":null}', '{"body":{"format":"something-else"}}'])(
    'tells that %s never was a trail',
    async (other) => {
      expect(await verifyTrail(other, nodeChecks)).toMatchObject({ ok: false, notATrail: true });
    },
  );

  it('finds a body that was sealed with another signature', async () => {
    const { signature } = JSON.parse(seal(buildTrailBody(3))) as { signature: string };
    const patched = canonicalJson({ ...(JSON.parse(text) as object), signature });
    expect(await verifyTrail(patched, nodeChecks)).toMatchObject({ brokenAt: "the export's signature" });
  });

  it('tells a picture and endless brackets from a trail', async () => {
    expect(await verifyTrail('['.repeat(100_000), nodeChecks)).toMatchObject({ notATrail: true });
    expect(await verifyTrail(Uint8Array.of(0xff, 0xd8, 0xff, 0xe0), nodeChecks)).toMatchObject({
      notATrail: true,
    });
  });

  it('has plain words for a file with a part missing or nested without end', async () => {
    const hollow = { body: { format: 'witnessmark-trail' }, publicKey: '', signature: '' };
    expect(await verifyTrail(canonicalJson(hollow), nodeChecks)).toMatchObject({ brokenAt: 'the file' });
    const deep = `{"body":{"deep":${'['.repeat(5000)}${']'.repeat(5000)},"format":"witnessmark-trail"}}`;
    expect(await verifyTrail(deep, nodeChecks)).toMatchObject({ brokenAt: 'the file' });
  });
});
