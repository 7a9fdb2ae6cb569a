import { describe, expect, it } from 'vitest';
import { chainHash, verifyTrail, type TrailVerdict } from '@/domain/trail';
import type { TrailBody } from '@/domain/trail-export';
import {
  buildTrailBody,
  nodeChecks,
  rechain,
  seal,
  sha256,
  signAsAuthor,
  signHead,
} from '../../tests/support/sealed-trail';

/*
 * Here somebody holds the workshop's own key, changes the trail, makes every hash and link right again and seals
 * it. What that person can not make is an author's signature.
 */

const body = buildTrailBody();
const OTHER_HASH = 'cd'.repeat(32);
type Change = (changed: TrailBody) => unknown;

async function verifyChanged(change: Change, isRechained = true): Promise<TrailVerdict> {
  const changed = structuredClone(body);
  change(changed);
  return verifyTrail(seal(isRechained ? rechain(changed) : changed), nodeChecks);
}

function expectBroken(verdict: TrailVerdict, brokenAt: string, why: string): void {
  expect(verdict).toMatchObject({ ok: false, brokenAt: expect.stringContaining(brokenAt) as string });
  expect(verdict).toMatchObject({ why: expect.stringContaining(why) as string });
}

/** Changes entry 17 and has its author sign it anew, as if the author had a hand in it. */
function withAuthor(change: (entry: TrailBody['entries'][number], changed: TrailBody) => unknown): Change {
  return (changed) => {
    const entry = changed.entries[16]!;
    change(entry, changed);
    signAsAuthor(entry);
  };
}

describe('what can not be rewritten without the authors', () => {
  it.each<[string, string, string, Change]>([
    [
      'a reading',
      'entry 17',
      'signature does not hold',
      ({ entries }) => (entries[16]!.recorded.data.clearance = '0.061'),
    ],
    [
      'the author',
      'entry 17',
      'another person or tablet',
      ({ entries }) => (entries[16]!.recorded.by = 'p-moss'),
    ],
    [
      'the tablet',
      'entry 17',
      'another person or tablet',
      ({ entries }) => Object.assign(entries[16]!.recorded, { device: 'tablet-3' }),
    ],
    ['a missing entry', 'entry 17', 'Number 18 is here', ({ entries }) => entries.splice(16, 1)],
    [
      'the order',
      'entry 17',
      'Number 18 is here',
      ({ entries }) => entries.splice(16, 2, entries[17]!, entries[16]!),
    ],
    [
      'a copied signature',
      'entry 17',
      'signature does not hold',
      ({ entries }) => (entries[16]!.signature = entries[18]!.signature),
    ],
    [
      'no signature',
      'entry 17',
      "carries no author's signature",
      ({ entries }) => Object.assign(entries[16]!, { signature: null, key: null }),
    ],
    ['half a signature', 'entry 17', 'not 64 bytes', ({ entries }) => (entries[16]!.signature = 'AAAA')],
    [
      'an unknown key',
      'entry 17',
      'is not in the file',
      ({ entries }) => (entries[16]!.key = '0123456789abcdef'),
    ],
    [
      'a person as the server',
      'entry 17',
      'another person',
      ({ entries }) => (entries[16]!.recorded.by = 'workshop'),
    ],
    [
      'a signed entry of the server',
      'entry 10',
      'and yet it is signed',
      ({ entries }) => (entries[9]!.signature = entries[8]!.signature),
    ],
  ])('%s is found', async (_, brokenAt, why, change) => {
    expectBroken(await verifyChanged(change), brokenAt, why);
  });

  it("another person's key is found even if its signature holds", async () => {
    const change: Change = ({ entries }) =>
      signAsAuthor(entries[16]!, { ...entries[16]!.recorded, by: 'p-moss' });
    expectBroken(await verifyChanged(change), 'entry 17', 'belongs to another person or tablet');
  });
});

describe('what can not be rewritten even with them', () => {
  it.each<[string, string, string, Change]>([
    [
      'an entry of another job',
      'entry 17',
      'another job',
      withAuthor(({ recorded }, { entries }) => (recorded.job = entries[0]!.recorded.id)),
    ],
    [
      'an id used twice',
      'entry 17',
      'id was used before',
      withAuthor(({ recorded }, { entries }) => (recorded.id = entries[2]!.recorded.id)),
    ],
    [
      'a plan that is not there',
      'entry 17',
      'plan',
      withAuthor(({ recorded }) => (recorded.plan = OTHER_HASH)),
    ],
    [
      'a count that goes back',
      'entry 17',
      'had already counted to 8',
      withAuthor(({ recorded }) => (recorded.deviceSeq = 8)),
    ],
    [
      'a workshop entry that is not there',
      'entry 17',
      'workshop entry 5, which is not',
      withAuthor(({ recorded }) => (recorded.workshop = 5)),
    ],
    ['a changed plan', 'entry 1', 'plan', (changed) => (changed.plans[0]!.name = 'Another plan')],
    ['no entries', 'the file', 'no entries', (changed) => Object.assign(changed, { entries: [], heads: [] })],
    [
      'a changed enrolment',
      'key ',
      'did not enrol it',
      ({ workshop }) => (workshop[1]!.recorded.data.person = 'p-other'),
    ],
    ['a missing enrolment', 'entry 1', 'workshop entry 4, which is not', ({ workshop }) => workshop.pop()],
    [
      'a workshop entry given twice',
      'workshop entry 4',
      'twice',
      ({ workshop }) => workshop.push(structuredClone(workshop[3]!)),
    ],
    ['a key given twice', 'key ', 'twice', ({ keys }) => keys.push({ ...keys[0]! })],
    ['a key given to another', 'key ', 'did not enrol it', ({ keys }) => (keys[0]!.person = 'p-moss')],
    [
      'another value',
      'identity: registration',
      'opened with',
      ({ identity }) => Object.assign(identity.registration!, { value: 'INV 999' }),
    ],
    [
      'another salt',
      'identity: contact',
      'opened with',
      ({ identity }) => Object.assign(identity.contact!, { salt: '00'.repeat(32) }),
    ],
    ['a missing value', 'identity: contact', 'neither', ({ identity }) => delete identity.contact],
    ['a value from nowhere', 'identity: vin', 'knows nothing', ({ identity }) => (identity.vin = 'erased')],
  ])('%s is found', async (_, brokenAt, why, change) => {
    expectBroken(await verifyChanged(change), brokenAt, why);
  });

  it.each<[string, string, string, Change]>([
    [
      'a broken link',
      'entry 17',
      'does not follow',
      ({ entries }) => {
        entries[16]!.recorded.prev = OTHER_HASH;
        entries[16]!.hash = chainHash(entries[16]!.recorded, sha256);
      },
    ],
    [
      'a changed hash',
      'entry 17',
      'not what its hash was made of',
      ({ entries }) => (entries[16]!.hash = OTHER_HASH),
    ],
    [
      'a changed hash of the workshop',
      'workshop entry 2',
      'not what its hash',
      ({ workshop }) => (workshop[1]!.hash = OTHER_HASH),
    ],
    [
      'a broken link of the workshop',
      'workshop entry 3',
      'does not follow',
      ({ workshop }) => {
        workshop[2]!.recorded.prev = OTHER_HASH;
        workshop[2]!.hash = chainHash(workshop[2]!.recorded, sha256);
      },
    ],
    [
      'a head with another hash',
      'the head at entry 20',
      'another entry',
      (changed) => (changed.heads = [signHead(changed, 20, { hash: OTHER_HASH })]),
    ],
    [
      'a head past the end',
      'the head at entry 41',
      'or none',
      (changed) => (changed.heads = [signHead(changed, 41, { hash: OTHER_HASH })]),
    ],
    [
      'a head of another job',
      'the head at entry 20',
      'another job',
      (changed) => (changed.heads = [signHead(changed, 20, { trail: 'another' })]),
    ],
    [
      'a head with another key',
      'the head at entry 20',
      'a key that is not in the file',
      (changed) => (changed.heads = [signHead(changed, 20, { key: OTHER_HASH })]),
    ],
    [
      'a head at another time',
      'the head at entry 20',
      'does not hold',
      ({ heads }) => (heads[0]!.at = '2031-03-04T16:00:01Z'),
    ],
    [
      "a key with another's point",
      'key ',
      'Its name is not',
      (changed) => {
        changed.keys[0]!.publicKey = changed.keys[1]!.publicKey;
        changed.workshop[0]!.recorded.data.publicKey = changed.keys[1]!.publicKey;
        rechain(changed);
      },
    ],
  ])('%s is found', async (_, brokenAt, why, change) => {
    expectBroken(await verifyChanged(change, false), brokenAt, why);
  });

  it('a tablet that repeats a number is only told of where it was recorded as a conflict', async () => {
    const repeated = withAuthor(({ recorded }) => {
      recorded.deviceSeq = 3;
      recorded.conflict = { code: 'copied-tablet', why: 'This number was there before.' };
    });
    const notes = expect.arrayContaining([expect.stringContaining('Entry 17 repeats number 3')]) as string[];
    expect(await verifyChanged(repeated)).toMatchObject({ ok: true, notes });
  });

  it("a head of the workshop's own trail is checked against the entries that are there", async () => {
    const sealWith = (seq: number, hash: string): Promise<TrailVerdict> => {
      const heads = [signHead(body, seq, { trail: 'workshop', hash })];
      return verifyTrail(seal({ ...body, heads }), nodeChecks);
    };
    expect(await sealWith(4, body.workshop[3]!.hash)).toMatchObject({ ok: true, heads: 1 });
    expect(await sealWith(9, OTHER_HASH)).toMatchObject({ ok: true, heads: 1 });
    expectBroken(await sealWith(4, OTHER_HASH), "the workshop's head at entry 4", 'another entry');
  });
});
