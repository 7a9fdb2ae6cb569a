/*
 * The form of an exported trail: one file that proves itself. Its text is the RFC 8785 form of
 * `{ body, publicKey, signature }`, the signature being Ed25519 over the hex SHA-256 of the body's own form.
 */
import * as z from 'zod/mini';
import { fromBase64url } from '@/domain/base64url';
import { canonicalJson } from '@/domain/canonical';
import { envelopeSchema } from '@/domain/entry';
import { instant } from '@/domain/instant';

export const TRAIL_FORMAT = 'witnessmark-trail';

const sha256Hex = z.string().check(z.regex(/^[0-9a-f]{64}$/));
const place = z.int().check(z.minimum(1));
const json = z.record(z.string(), z.unknown());

/** An entry as the server recorded it: the author's fields and the server's side by side. */
const recordedSchema = z.extend(envelopeSchema, {
  seq: place,
  recordedAt: instant,
  prev: sha256Hex,
  clockOffsetMs: z.int(),
  pin: z.optional(json),
  conflict: z.optional(json),
});

/** An entry of the workshop's own trail; its kinds belong to the workshop and are not judged here. */
const workshopEntrySchema = z.looseObject({ seq: place, prev: sha256Hex, kind: z.string(), data: json });

const headSchema = z.strictObject({
  trail: z.string(),
  seq: place,
  hash: sha256Hex,
  at: instant,
  key: sha256Hex,
  signature: z.string(),
});

const workshopKeySchema = z.strictObject({
  /** The fingerprint: hex SHA-256 of the raw 32-byte key. */
  key: sha256Hex,
  /** The raw Ed25519 key, base64url. */
  publicKey: z.string(),
  since: instant,
  /** The signature of the key before it; the first has none. */
  signedBefore: z.nullable(z.string()),
});

const bodySchema = z.strictObject({
  v: z.literal(1),
  format: z.literal(TRAIL_FORMAT),
  exportedAt: instant,
  job: z.strictObject({ id: z.string(), number: z.string() }),
  plans: z.array(json),
  /** Only what the server itself made carries no author's signature and no key. */
  entries: z.array(
    z.strictObject({
      recorded: recordedSchema,
      hash: sha256Hex,
      signature: z.nullable(z.string()),
      key: z.nullable(z.string()),
    }),
  ),
  keys: z.array(
    z.strictObject({
      id: z.string().check(z.regex(/^[0-9a-f]{16}$/)),
      person: z.string(),
      device: z.string(),
      /** The raw uncompressed P-256 point, base64url. */
      publicKey: z.string(),
      /** The workshop entry that enrolled it. */
      workshop: place,
    }),
  ),
  workshop: z.array(z.strictObject({ recorded: workshopEntrySchema, hash: sha256Hex })),
  heads: z.array(headSchema),
  /** Every key that the workshop has signed with, the oldest first; the last one signs the export. */
  workshopKeys: z.array(workshopKeySchema).check(z.minLength(1)),
  identity: z.record(
    z.string(),
    z.union([
      z.strictObject({ value: z.string(), salt: z.string().check(z.regex(/^([0-9a-f]{2}){16,64}$/)) }),
      z.literal('erased'),
      /** Known to the workshop and not for whoever made this export. */
      z.literal('withheld'),
    ]),
  ),
  /** Each travels beside the file, named by its hash, unless an erasure took it. */
  photographs: z.array(
    z.strictObject({
      hash: sha256Hex,
      bytes: z.int().check(z.minimum(0)),
      state: z.enum(['kept', 'missing', 'erased']),
    }),
  ),
});

export const trailExportSchema = z.strictObject({
  body: bodySchema,
  /** The workshop's Ed25519 key, its 32 bytes in base64url. */
  publicKey: z.string(),
  signature: z.string(),
});

export type TrailExport = z.infer<typeof trailExportSchema>;
export type TrailBody = TrailExport['body'];
export type SignedHead = TrailBody['heads'][number];
export type WorkshopKey = TrailBody['workshopKeys'][number];

/** Where and why a trail does not hold. */
export class BrokenTrailError extends Error {
  override name = 'BrokenTrailError';

  constructor(
    readonly brokenAt: string,
    readonly why: string,
  ) {
    super(`${brokenAt}: ${why}`);
  }
}

/** Requires what must hold of a trail, and says where it does not. */
export function requireWhole(holds: boolean, at: string, why: string): asserts holds {
  if (!holds) throw new BrokenTrailError(at, why);
}

/** A file that was read as JSON and says that it is an exported trail; or why not, and whether it once was one. */
export type OpenedExport = { text: string; parsed: unknown } | { isTrail: boolean; why: string };

/** Reads a file far enough to tell a trail, a damaged trail and something else apart; never throws. */
export function openExport(file: string | Uint8Array): OpenedExport {
  let text: string;
  try {
    // A byte order mark is a changed byte like any other, so it must not be skipped.
    const decoder = new TextDecoder('utf-8', { fatal: true, ignoreBOM: true });
    text = typeof file === 'string' ? file : decoder.decode(file);
  } catch {
    const isTrail = claimsToBeTrail(new TextDecoder().decode(file as Uint8Array));
    return { isTrail, why: 'It is not text in UTF-8.' };
  }
  try {
    const parsed: unknown = JSON.parse(text);
    if (formatOf(parsed) === TRAIL_FORMAT) return { text, parsed };
    return { isTrail: false, why: 'It is JSON, but not an exported trail.' };
  } catch {
    return { isTrail: claimsToBeTrail(text), why: 'It is not whole: its text can not be read as JSON.' };
  }
}

/** Requires that the text is the one form of its value, and the value that of an export. */
export function requireExport({ text, parsed }: { text: string; parsed: unknown }): TrailExport {
  const why = 'Its text is not the one form that such a file has: something in it was changed.';
  requireWhole(canonicalOrBroken(parsed) === text, 'the file', why);
  const shaped = z.safeParse(trailExportSchema, parsed);
  if (shaped.success) return shaped.data;
  const [issue] = shaped.error.issues;
  const [, list, index] = issue?.path ?? [];
  const isEntry = list === 'entries' && typeof index === 'number';
  const path = issue?.path.map(String).join('.') || 'It';
  throw new BrokenTrailError(isEntry ? `entry ${index + 1}` : 'the file', `${path} is not as it must be.`);
}

/** The form of the body within the text of an export, as the signature covers it. */
export function bodyTextOf(text: string, { publicKey, signature }: TrailExport): string {
  const rest = canonicalJson({ publicKey, signature }).length;
  return text.slice('{"body":'.length, text.length - rest);
}

/** The bytes of a key or signature, which must be so many. */
export function requireBytes(text: string, length: number, at: string): Uint8Array<ArrayBuffer> {
  try {
    const bytes = fromBase64url(text);
    if (bytes.length === length) return bytes;
  } catch (error) {
    if (!(error instanceof RangeError)) throw error;
  }
  throw new BrokenTrailError(at, `A key or signature in it is not ${length} bytes of base64url.`);
}

function canonicalOrBroken(parsed: unknown): string {
  try {
    return canonicalJson(parsed);
  } catch (error) {
    if (error instanceof RangeError) throw new BrokenTrailError('the file', error.message);
    throw error;
  }
}

/** Tells a damaged trail from a file that never was one. */
function claimsToBeTrail(text: string): boolean {
  return text.includes(`"format":"${TRAIL_FORMAT}"`);
}

function formatOf(parsed: unknown): unknown {
  if (typeof parsed !== 'object' || parsed === null || !('body' in parsed)) return undefined;
  const { body } = parsed;
  return typeof body === 'object' && body !== null && 'format' in body ? body.format : undefined;
}
