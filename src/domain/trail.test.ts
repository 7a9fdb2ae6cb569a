import { describe, expect, it } from 'vitest';
import { canonicalJson } from '@/domain/canonical';
import { chainHash, contentHash, contentOf, verifyTrail, type TrailVerdict } from '@/domain/trail';
import type { TrailBody } from '@/domain/trail-export';
import {
  buildTrailBody,
  fingerprint,
  nodeChecks,
  rechain,
  seal,
  sha256,
  signAsAuthor,
  signHead,
} from '../../tests/support/sealed-trail';

const body = buildTrailBody();
const text = seal(body);

/** Verifies a trail that somebody with the workshop's key changed and sealed again. */
function verifyChanged(change: (changed: TrailBody) => void, isRechained = true): Promise<TrailVerdict> {
  const changed = structuredClone(body);
  change(changed);
  return verifyTrail(seal(isRechained ? rechain(changed) : changed), nodeChecks);
}

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
      ...{ ok: true, entries: 40, signatures: 36, heads: 2, key: fingerprint },
      ...{ keyCompared: false, headCompared: false },
      notes: ['complaint: erased.', 'Key not compared.', 'Head not compared.'],
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

  it.each([
    ['white space', (whole: string) => whole.replace('"v":1', '"v": 1')],
    [
      'another order',
      (whole: string) => whole.replace(/^\{"body":(.*),"publicKey":("[^"]+"),/, '{"publicKey":$2,"body":$1,'),
    ],
    ['a key given twice', (whole: string) => whole.replace('{"body":', '{"body":0,"body":')],
    [
      'capitals in a hash',
      (whole: string) => whole.replace(/"hash":"[0-9a-f]+"/, (hash) => hash.toUpperCase()),
    ],
    ['another escape', (whole: string) => whole.replace('Wren', '\\u0057ren')],
    ['a line at its end', (whole: string) => `${whole}\n`],
    ['a byte order mark', (whole: string) => `\uFEFF${whole}`],
    ['its end cut off', (whole: string) => whole.slice(0, -1)],
  ])('finds it broken with %s', async (_, damage) => {
    const damaged = damage(text);
    expect(damaged).not.toBe(text);
    for (const file of [damaged, Buffer.from(damaged)]) {
      expect(await verifyTrail(file, nodeChecks)).toMatchObject({
        ok: false,
        brokenAt: expect.any(String) as string,
      });
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

describe('verifyTrail on a trail that was rewritten with the workshop key', () => {
  it.each<[string, string, (changed: TrailBody) => void]>([
    ['a reading was changed', 'entry 17', ({ entries }) => (entries[16]!.recorded.data.clearance = '0.061')],
    ['an author was changed', 'entry 17', ({ entries }) => (entries[16]!.recorded.by = 'p-moss')],
    ['an entry was taken out', 'entry 17', ({ entries }) => entries.splice(16, 1)],
    [
      'two entries changed places',
      'entry 17',
      ({ entries }) => entries.splice(16, 2, entries[17]!, entries[16]!),
    ],
    [
      'a signature was copied over',
      'entry 17',
      ({ entries }) => (entries[16]!.signature = entries[18]!.signature),
    ],
    [
      'a signature was taken away',
      'entry 17',
      ({ entries }) => Object.assign(entries[16]!, { signature: null, key: null }),
    ],
    ['a signature is no signature', 'entry 17', ({ entries }) => (entries[16]!.signature = 'AAAA')],
    ['an unknown key is named', 'entry 17', ({ entries }) => (entries[16]!.key = '0123456789abcdef')],
    [
      'an entry pretends to be the server',
      'entry 17',
      ({ entries }) => (entries[16]!.recorded.by = 'workshop'),
    ],
    [
      'the server signed like a person',
      'entry 10',
      ({ entries }) => (entries[9]!.signature = entries[8]!.signature),
    ],
    [
      'an entry is of another job',
      'entry 17',
      ({ entries }) => (entries[16]!.recorded.job = entries[0]!.recorded.id),
    ],
    ['an id came twice', 'entry 17', ({ entries }) => (entries[16]!.recorded.id = entries[2]!.recorded.id)],
    ['a plan is missing', 'entry 1', (changed) => (changed.plans = [])],
    ['a plan was changed', 'entry 1', (changed) => (changed.plans[0]!.name = 'Another plan')],
    ['there are no entries', 'the file', (changed) => Object.assign(changed, { entries: [], heads: [] })],
    [
      'a workshop entry was changed',
      'key ',
      ({ workshop }) => (workshop[1]!.recorded.data.person = 'p-other'),
    ],
    ['a workshop entry is missing', 'entry 1', ({ workshop }) => workshop.pop()],
    ['a workshop entry came twice', 'workshop entry 3', ({ workshop }) => (workshop[3]!.recorded.seq = 3)],
    ['a key came twice', 'key ', ({ keys }) => keys.push({ ...keys[0]! })],
    ['a key was given to another', 'key ', ({ keys }) => (keys[0]!.person = 'p-moss')],
    [
      'a value was changed',
      'identity: registration',
      ({ identity }) => Object.assign(identity.registration!, { value: 'INV 999' }),
    ],
    [
      'a salt was changed',
      'identity: contact',
      ({ identity }) => Object.assign(identity.contact!, { salt: '00'.repeat(32) }),
    ],
    ['a value is missing', 'identity: contact', ({ identity }) => delete identity.contact],
    ['a value came from nowhere', 'identity: vin', ({ identity }) => (identity.vin = 'erased')],
  ])('finds that %s', async (_, brokenAt, change) => {
    const verdict = await verifyChanged(change);
    expect(verdict).toMatchObject({ ok: false, brokenAt: expect.stringContaining(brokenAt) as string });
  });

  it.each<[string, string, (changed: TrailBody) => void]>([
    ['a link was broken', 'entry 17', ({ entries }) => (entries[16]!.recorded.prev = 'cd'.repeat(32))],
    ['a hash was changed', 'entry 17', ({ entries }) => (entries[16]!.hash = 'cd'.repeat(32))],
    [
      'a workshop link was broken',
      'workshop entry 3',
      ({ workshop }) => {
        workshop[2]!.recorded.prev = 'cd'.repeat(32);
        workshop[2]!.hash = chainHash(workshop[2]!.recorded, sha256);
      },
    ],
    [
      'a head names another hash',
      'the head at entry 20',
      ({ heads, entries }) => (heads[0]!.hash = entries[20]!.hash),
    ],
    ['a head names no entry', 'the head at entry 41', ({ heads }) => (heads[1]!.seq = 41)],
    ['a head is of another job', 'the head at entry 20', ({ heads }) => (heads[0]!.trail = 'another')],
    ['a head has another key', 'the head at entry 20', ({ heads }) => (heads[0]!.key = 'cd'.repeat(32))],
    [
      'a head has another time',
      'the head at entry 20',
      ({ heads }) => (heads[0]!.at = '2031-03-04T16:00:01Z'),
    ],
    [
      'a point is not that of its key',
      'key ',
      (changed) => {
        changed.keys[0]!.publicKey = changed.keys[1]!.publicKey;
        changed.workshop[0]!.recorded.data.publicKey = changed.keys[1]!.publicKey;
        rechain(changed);
      },
    ],
  ])('finds that %s', async (_, brokenAt, change) => {
    const verdict = await verifyChanged(change, false);
    expect(verdict).toMatchObject({ ok: false, brokenAt: expect.stringContaining(brokenAt) as string });
  });

  it("finds that an entry's tablet counted backwards, unless it was recorded as a conflict", async () => {
    const repeat = (changed: TrailBody, conflict?: Record<string, string>): void => {
      const entry = changed.entries[16]!;
      entry.recorded.deviceSeq = 3;
      if (conflict !== undefined) entry.recorded.conflict = conflict;
      signAsAuthor(entry);
    };
    expect(await verifyChanged((changed) => repeat(changed))).toMatchObject({ brokenAt: 'entry 17' });
    const verdict = await verifyChanged((changed) =>
      repeat(changed, { code: 'copied-tablet', why: 'number seen' }),
    );
    expect(verdict).toMatchObject({
      ok: true,
      notes: expect.arrayContaining([expect.stringContaining('Entry 17 repeats')]) as string[],
    });
  });

  it("checks a head of the workshop's own trail against the entries that are there", async () => {
    const { workshop } = body;
    const sealWith = (seq: number, hash: string): Promise<TrailVerdict> => {
      const heads = [signHead(body, seq, { trail: 'workshop', hash })];
      return verifyTrail(seal({ ...body, heads }), nodeChecks);
    };
    expect(await sealWith(4, workshop[3]!.hash)).toMatchObject({ ok: true, heads: 1 });
    expect(await sealWith(9, 'cd'.repeat(32))).toMatchObject({ ok: true, heads: 1 });
    expect(await sealWith(4, 'cd'.repeat(32))).toMatchObject({ brokenAt: "the workshop's head at entry 4" });
  });

  it('finds a body that was sealed with another signature', async () => {
    const other = seal(buildTrailBody(3));
    const signature = JSON.parse(other) as { signature: string };
    const patched = canonicalJson({ ...(JSON.parse(text) as object), signature: signature.signature });
    expect(await verifyTrail(patched, nodeChecks)).toMatchObject({ brokenAt: "the export's signature" });
  });
});
