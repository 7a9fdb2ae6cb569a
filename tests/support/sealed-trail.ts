import {
  createHash,
  createHmac,
  createPublicKey,
  generateKeyPairSync,
  sign,
  verify,
  type KeyObject,
  type KeyPairKeyObjectResult,
} from 'node:crypto';
import { canonicalJson, hashJson } from '@/domain/canonical';
import {
  authorKeyId,
  authorMessage,
  chainHash,
  contentHash,
  contentOf,
  exportMessage,
  headMessage,
  identityCommitment,
  keyMessage,
} from '@/domain/trail';
import type { TrailChecks } from '@/domain/trail-checks';
import type { TrailBody } from '@/domain/trail-export';
import { NO_PREVIOUS } from '@/domain/trail-hash';

/*
 * Whole exported trails for tests, made with keys of their own. `rechain` and `seal` let a test play somebody
 * who holds the workshop's key and rewrites the trail.
 */

export const JOB = '01900000-0000-7000-8000-000000000001';
const TABLETS = ['tablet-1', 'tablet-2'] as const;
const PEOPLE = ['p-wren', 'p-moss'] as const;
export const PHOTO = 'ab'.repeat(32);
/** The places of the entries that are no readings; the server makes every tenth. */
const PICTURE = 2;
const ERASURE = 9;

export function sha256(bytes: Uint8Array): string {
  return createHash('sha256').update(bytes).digest('hex');
}

export function hmacSha256(key: Uint8Array, message: Uint8Array): string {
  return createHmac('sha256', key).update(message).digest('hex');
}

/** What `verifyTrail` needs, done by Node's own cryptography. */
export const nodeChecks: TrailChecks = {
  sha256,
  hmacSha256,
  verifyEd25519: (publicKey, message, signature) => {
    const key = { kty: 'OKP', crv: 'Ed25519', x: Buffer.from(publicKey).toString('base64url') };
    return verify(null, message, createPublicKey({ key, format: 'jwk' }), signature);
  },
  verifyP256: (publicKey, message, signature) => {
    const [x, y] = [publicKey.subarray(1, 33), publicKey.subarray(33)].map((half) =>
      Buffer.from(half).toString('base64url'),
    );
    const key = createPublicKey({ key: { kty: 'EC', crv: 'P-256', x: x!, y: y! }, format: 'jwk' });
    return verify('sha256', message, { key, dsaEncoding: 'ieee-p1363' }, signature);
  },
};

const workshopKey = generateKeyPairSync('ed25519');
const authorKeys = new Map<string, KeyPairKeyObjectResult>(
  PEOPLE.flatMap((person) =>
    TABLETS.map(
      (device) => [`${person}@${device}`, generateKeyPairSync('ec', { namedCurve: 'P-256' })] as const,
    ),
  ),
);

function rawEd25519(key: KeyObject): Buffer {
  return Buffer.from(key.export({ format: 'jwk' }).x!, 'base64url');
}

function rawP256(key: KeyObject): Buffer {
  const { x, y } = key.export({ format: 'jwk' });
  return Buffer.concat([Buffer.of(4), Buffer.from(x!, 'base64url'), Buffer.from(y!, 'base64url')]);
}

/** One more key of a workshop as an export names it, signed by the one before it. */
export function workshopKeyOf(
  pair: KeyPairKeyObjectResult,
  before?: KeyPairKeyObjectResult,
): TrailBody['workshopKeys'][number] {
  const raw = rawEd25519(pair.publicKey);
  const named = { key: sha256(raw), publicKey: raw.toString('base64url'), since: '2031-01-01T08:00:00Z' };
  if (before === undefined) return { ...named, signedBefore: null };
  const message = keyMessage({ ...named, before: sha256(rawEd25519(before.publicKey)) });
  return { ...named, signedBefore: sign(null, message, before.privateKey).toString('base64url') };
}

/** The pair that `seal` signs with. */
export const workshopPair = workshopKey;

/** The fingerprint of the key that `seal` signs with. */
export const fingerprint = sha256(rawEd25519(workshopKey.publicKey));

/** Signs one recorded entry's content as its author would have on that tablet. */
export function signAsAuthor(entry: TrailBody['entries'][number], as = entry.recorded): void {
  const pair = authorKeys.get(`${as.by}@${as.device}`)!;
  const message = authorMessage(contentHash(contentOf(entry.recorded), sha256));
  entry.signature = sign('sha256', message, { key: pair.privateKey, dsaEncoding: 'ieee-p1363' }).toString(
    'base64url',
  );
  entry.key = authorKeyId(rawP256(pair.publicKey), sha256);
}

/** Puts the links and hashes of a body right again after a test has changed it; signatures stay as they are. */
export function rechain(body: TrailBody): TrailBody {
  for (const list of [body.entries, body.workshop]) {
    let prev = NO_PREVIOUS;
    for (const entry of list) {
      entry.recorded.prev = prev;
      entry.hash = chainHash(entry.recorded, sha256);
      prev = entry.hash;
    }
  }
  body.heads = body.heads
    .filter(({ seq }) => seq <= body.entries.length)
    .map(({ seq }) => signHead(body, seq));
  return body;
}

/** A signed head of a trail at one entry; the hash is that entry's unless given. */
export function signHead(
  body: TrailBody,
  seq: number,
  { trail = JOB, hash = body.entries[seq - 1]?.hash ?? NO_PREVIOUS, key = fingerprint } = {},
): TrailBody['heads'][number] {
  const head = { trail, seq, hash, at: '2031-03-04T16:00:00Z', key };
  return { ...head, signature: sign(null, headMessage(head), workshopKey.privateKey).toString('base64url') };
}

/** The text of the export, signed with the workshop's key. */
export function seal(body: TrailBody): string {
  return canonicalJson({
    body,
    publicKey: rawEd25519(workshopKey.publicKey).toString('base64url'),
    signature: sign(null, exportMessage(body, sha256), workshopKey.privateKey).toString('base64url'),
  });
}

/** A whole body of so many entries by two people on two tablets, one entry in ten made by the server. */
export function buildTrailBody(count = 40): TrailBody {
  const plan = { v: 1, name: 'An invented plan', steps: [{ id: 'measure.gauge@rod1', kind: 'gauge' }] };
  const identity = {
    registration: { value: 'INV 123 É', salt: '5a'.repeat(32) },
    contact: { value: 'somebody@example.test', salt: '0f'.repeat(32) },
    // A trail too short to tell of an erasure has nothing erased.
    complaint: count > ERASURE ? ('erased' as const) : { value: 'knocks when cold', salt: '77'.repeat(32) },
  };
  const commitments = {
    registration: identityCommitment(identity.registration, hmacSha256),
    contact: identityCommitment(identity.contact, hmacSha256),
    complaint: identityCommitment({ value: 'knocks when cold', salt: '77'.repeat(32) }, hmacSha256),
  };
  const body: TrailBody = {
    ...{ v: 1, format: 'witnessmark-trail', exportedAt: '2031-03-05T09:00:00Z' },
    job: { id: JOB, number: 'J-0017' },
    ...{ plans: [plan], entries: [], keys: [], workshop: [], heads: [], identity },
    workshopKeys: [workshopKeyOf(workshopKey)],
    photographs: [{ hash: PHOTO, bytes: 182_044, state: 'kept' }],
  };
  addKeys(body);
  for (let i = 0; i < count; i += 1) body.entries.push(entryAt(i, hashJson(plan, sha256), commitments));
  rechain(body);
  for (const entry of body.entries) if (entry.recorded.by !== 'workshop') signAsAuthor(entry);
  body.heads = [signHead(body, Math.ceil(count / 2)), signHead(body, count)];
  return body;
}

function addKeys(body: TrailBody): void {
  for (const [index, [owner, pair]] of [...authorKeys].entries()) {
    const [person, device] = owner.split('@') as [string, string];
    const publicKey = rawP256(pair.publicKey).toString('base64url');
    const seq = index + 1;
    const data = { key: authorKeyId(rawP256(pair.publicKey), sha256), publicKey, person, tablet: device };
    body.workshop.push({ recorded: { v: 1, seq, prev: NO_PREVIOUS, kind: 'key-enrolled', data }, hash: '' });
    body.keys.push({ id: data.key, person, device, publicKey, workshop: seq });
  }
}

function kindAt(index: number): string {
  if (index === ERASURE) return 'erased';
  if (index % 10 === 9) return 'refused';
  return index === 0 ? 'opened' : index === PICTURE ? 'photographed' : 'gauged';
}

function dataAt(index: number, commitments: Record<string, string>): Record<string, unknown> {
  if (index === 0) return { commitments };
  if (index === PICTURE) return { photo: PHOTO, bytes: 182_044, type: 'image/webp', from: 'camera here' };
  if (index === ERASURE) return { fields: ['complaint'], photographs: [], reason: 'asked for' };
  return {
    end: 'front',
    clearance: '0.050',
    uncertainty: '0.006',
    unit: 'mm',
    note: 'thread laid – dry, 20 °C',
  };
}

function entryAt(
  index: number,
  plan: string,
  commitments: Record<string, string>,
): TrailBody['entries'][number] {
  const isServers = index % 10 === 9;
  const minute = `2031-03-04T${String(8 + Math.floor(index / 60)).padStart(2, '0')}:${String(index % 60).padStart(2, '0')}`;
  const recorded: TrailBody['entries'][number]['recorded'] = {
    ...{ v: 1, id: `01900000-0000-7000-8000-${String(index + 100).padStart(12, '0')}`, job: JOB, plan },
    ...{ basis: index, workshop: 4, kind: kindAt(index) },
    step: 'measure.gauge@rod1',
    by: isServers ? 'workshop' : PEOPLE[index % 3 === 0 ? 1 : 0],
    author: { name: isServers ? 'Workshop' : 'Ada Wren', roles: ['technician'] },
    with: [],
    device: isServers ? 'server' : TABLETS[index % 2]!,
    deviceSeq: Math.floor(index / 2) + 1,
    at: `${minute}:00Z`,
    data: dataAt(index, commitments),
    ...{ seq: index + 1, recordedAt: `${minute}:02Z`, prev: NO_PREVIOUS, clockOffsetMs: -140 },
  };
  return { recorded, hash: '', signature: null, key: null };
}
