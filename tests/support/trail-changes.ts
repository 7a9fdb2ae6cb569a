import { generateKeyPairSync, type KeyPairKeyObjectResult, sign } from 'node:crypto';
import { canonicalJson, hashJson } from '@/domain/canonical';
import { contentOf } from '@/domain/trail';
import type { TrailBody, TrailExport } from '@/domain/trail-export';
import { sha256, workshopKeyOf } from './sealed-trail';

/*
 * What somebody could change in an exported trail: single bytes, anywhere; and the record itself, put right
 * again and sealed by somebody who has every paper but the keys.
 */

/** Bytes taken out at a place, and what is put in there. */
export type Edit = [at: number, taken: number, put: string];

/** One changed trail, and where both verifiers have to find it broken. */
export interface Change {
  name: string;
  edits?: Edit[];
  text?: string;
  head?: string;
  key?: string;
  photographs?: string;
  /** Left out where any place will do. */
  place?: string | undefined;
  /** Nothing in the file itself shows it. */
  isWhole?: boolean;
}

/** Numbers from 0 to 1 that are the same in every run (mulberry32). */
export function seeded(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let mixed = Math.imul(state ^ (state >>> 15), 1 | state);
    mixed = (mixed + Math.imul(mixed ^ (mixed >>> 7), 61 | mixed)) ^ mixed;
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 2 ** 32;
  };
}

const put = (text: string | Uint8Array) => Buffer.from(text as string).toString('base64');

/** So many single-bit changes in each region of the file. */
export function bitChanges(file: Buffer, perRegion: number, next: () => number): Change[] {
  return regionsOf(file).flatMap(({ name, from, to }) =>
    Array.from({ length: perRegion }, () => {
      const at = from + Math.floor(next() * (to - from));
      const bit = Math.floor(next() * 8);
      const byte = Uint8Array.of(file[at]! ^ (1 << bit));
      return { name: `bit ${bit} of byte ${at}, in ${name}`, edits: [[at, 1, put(byte)]] satisfies Edit[] };
    }),
  );
}

/** Where each field of the file begins and ends. */
function regionsOf(file: Buffer): { name: string; from: number; to: number }[] {
  const exported = JSON.parse(file.toString()) as TrailExport;
  const regions = [
    ...Object.entries(exported.body),
    ...Object.entries(exported).filter(([name]) => name !== 'body'),
  ].map(([name, value]) => {
    const field = Buffer.from(`"${name}":${canonicalJson(value)}`);
    const from = file.lastIndexOf(field);
    return { name, from, to: from + field.length };
  });
  if (regions.some(({ from }) => from < 0)) throw new RangeError('A field of the file was not found in it.');
  return [...regions, { name: 'the file', from: 0, to: file.length }];
}

/** What is put in for a sign of one sort: something else of the same sort, which is the hardest to see. */
const SORTS: { name: string; sign: RegExp; edit: (at: number, sign: string) => Edit }[] = [
  {
    name: 'a letter of a name',
    sign: /[a-z](?=\w*":)/g,
    edit: (at, s) => [at, 1, put(s === 'x' ? 'y' : 'x')],
  },
  { name: 'a digit', sign: /\d/g, edit: (at, s) => [at, 1, put(String((Number(s) + 1) % 10))] },
  {
    name: 'the case of a hex digit',
    sign: /[a-f](?=[0-9a-f]{8})/g,
    edit: (at, s) => [at, 1, put(s.toUpperCase())],
  },
  {
    name: 'a sign of a signature or key',
    sign: /[A-Za-z0-9_-](?=[A-Za-z0-9_-]{20,}")/g,
    edit: (at, s) => [at, 1, put(s === 'A' ? 'B' : 'A')],
  },
  {
    name: 'the last sign of a signature or key',
    sign: /(?<=[A-Za-z0-9_-]{42,})[A-Za-z0-9_-](?=")/g,
    edit: (at, s) => [at, 1, put(nextInBase64Url(s))],
  },
  { name: 'a space put in', sign: /[,:]/g, edit: (at) => [at + 1, 0, put(' ')] },
  { name: 'a line end put in', sign: /[{}[\]]/g, edit: (at) => [at, 0, put('\n')] },
  { name: 'a sign of a text taken out', sign: /[a-z](?=[a-z])/g, edit: (at) => [at, 1, ''] },
  { name: 'a sign of a text doubled', sign: /[a-z](?=[a-z])/g, edit: (at, s) => [at, 0, put(s)] },
  { name: 'a letter escaped', sign: /[a-z](?=[a-z])/g, edit: (at, s) => [at, 1, put(escaped(s))] },
];

function nextInBase64Url(sign: string): string {
  const signs = 'ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789-_';
  return signs[(signs.indexOf(sign) + 1) % 64]!;
}

const escaped = (sign: string) => `\\u${sign.charCodeAt(0).toString(16).padStart(4, '0')}`;

/** So many changes of each sort of sign. */
export function signChanges(file: Buffer, perSort: number, next: () => number): Change[] {
  // One sign a byte, so that a place in the text is a place in the file.
  const text = file.toString('latin1');
  return SORTS.flatMap(({ name, sign, edit }) => {
    const places = [...text.matchAll(sign)];
    return Array.from({ length: perSort }, () => {
      const { index, 0: found } = places[Math.floor(next() * places.length)]!;
      return { name: `${name}, at byte ${index}`, edits: [edit(index, found)] };
    });
  });
}

/** Does the change hit what marks the file as a trail at all? */
export function hitsMark(file: Buffer, { edits = [] }: Change): boolean {
  const mark = '"format":"witnessmark-trail"';
  const from = file.indexOf(mark);
  return edits.some(([at]) => at < '{"body":'.length || (at >= from && at <= from + mark.length));
}

const forgedKey = generateKeyPairSync('ed25519');
const forgedAuthor = generateKeyPairSync('ec', { namedCurve: 'P-256' });

const bySigner = (pair: KeyPairKeyObjectResult, message: string) =>
  sign(null, Buffer.from(message), pair.privateKey).toString('base64url');

/** The whole of a trail put right again with a key of the forger's, as if it had always been the workshop's. */
export function forged(file: Buffer, change: (body: TrailBody) => void): string {
  const { body } = JSON.parse(file.toString()) as TrailExport;
  change(body);
  const own = workshopKeyOf(forgedKey);
  body.workshopKeys = [own];
  body.heads = body.heads
    .filter(({ trail, seq }) => trail !== body.job.id || seq <= body.entries.length)
    .map(({ trail, seq, hash, at }) => {
      const now = trail === body.job.id ? body.entries[seq - 1]!.hash : hash;
      const head = { trail, seq, hash: now, at, key: own.key };
      return { ...head, signature: bySigner(forgedKey, canonicalJson(head)) };
    });
  return sealedBy(forgedKey, body, own.publicKey);
}

/** A changed trail that is sealed by the forger under the workshop's own keys; its heads stay as they were. */
export function resealed(file: Buffer, change: (body: TrailBody) => void): string {
  const { body } = JSON.parse(file.toString()) as TrailExport;
  change(body);
  return sealedBy(forgedKey, body, body.workshopKeys.at(-1)!.publicKey);
}

function sealedBy(pair: KeyPairKeyObjectResult, body: TrailBody, publicKey: string): string {
  return canonicalJson({ body, publicKey, signature: bySigner(pair, hashJson(body, sha256)) });
}

/** Numbers and chains the entries again; their authors' signatures stay as they are. */
export function chainAgain(body: TrailBody): void {
  let prev = '0'.repeat(64);
  for (const [index, entry] of body.entries.entries()) {
    Object.assign(entry.recorded, { seq: index + 1, prev });
    prev = entry.hash = hashJson(entry.recorded, sha256);
  }
}

/** Puts a key of the forger's in the place of an author's, and signs that author's entries with it. */
export function replaceAuthorKey(body: TrailBody, id: string): string {
  const { x, y } = forgedAuthor.publicKey.export({ format: 'jwk' });
  const raw = Buffer.concat([Buffer.of(4), Buffer.from(x!, 'base64url'), Buffer.from(y!, 'base64url')]);
  const own = { id: sha256(raw).slice(0, 16), publicKey: raw.toString('base64url') };
  Object.assign(
    body.keys.find((key) => key.id === id)!,
    own,
  );
  for (const entry of body.entries.filter(({ key }) => key === id)) {
    const key = { key: forgedAuthor.privateKey, dsaEncoding: 'ieee-p1363' as const };
    const message = Buffer.from(hashJson(contentOf(entry.recorded), sha256));
    entry.signature = sign('sha256', message, key).toString('base64url');
    entry.key = own.id;
  }
  return own.id;
}
