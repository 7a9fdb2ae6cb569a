import * as z from 'zod';

/** The most that one push may bring; what is over goes with the next. */
export const SYNC_ENTRIES = 200;
export const SYNC_JOBS = 100;
export const SYNC_LIMIT_BYTES = 512 * 1024;

const uuid = z.string().regex(/^[0-9a-f]{8}-[0-9a-f]{4}-[1-8][0-9a-f]{3}-[89ab][0-9a-f]{3}-[0-9a-f]{12}$/);
const hash = z.string().regex(/^[0-9a-f]{64}$/);
const instant = z.iso.datetime({ offset: false });

/** Only this envelope is answered 400: its entries are read one by one, each with a verdict of its own. */
export const syncBodySchema = z.strictObject({
  device: uuid,
  /** The tablet's clock as it sends. */
  sentAt: instant,
  jobs: z
    .array(
      z.strictObject({
        id: uuid,
        /** The last entry of the job that the tablet holds. */
        have: z.nullable(z.strictObject({ seq: z.int().min(1), hash })),
      }),
    )
    .max(SYNC_JOBS),
  entries: z.array(z.unknown()).max(SYNC_ENTRIES),
});

export type SyncBody = z.infer<typeof syncBodySchema>;

/** What travels beside an entry: the author's signature, the key it is by, and a sealed PIN where one is asked. */
export const carriedSchema = z.strictObject({
  entry: z.unknown(),
  signature: z.string().regex(/^[A-Za-z0-9_-]{86}$/, 'a P-256 signature of 64 bytes, base64url'),
  key: z.string().regex(/^[0-9a-f]{16}$/, 'the id of an author key'),
  sealed: z
    .strictObject({
      keyId: z.string().regex(/^[0-9a-f]{16}$/),
      enc: z.string().regex(/^[A-Za-z0-9_-]{80,100}$/),
      ciphertext: z.string().regex(/^[A-Za-z0-9_-]{20,200}$/),
    })
    .optional(),
  /** The tablet was told so before the server was restored to an earlier time, and the server lost it. */
  refused: z.strictObject({ reason: z.string().min(1).max(1000) }).optional(),
  /** It was made on a trail of which a restore took the end, so what its tablet saw can't be had any more. */
  restored: z.literal(true).optional(),
  /** When the server had last been restored, as the workshop told by which it was made; absent if it never had. */
  workshopRestoredAt: instant.optional(),
});

export type Carried = z.infer<typeof carriedSchema>;

const recordedSchema = z.looseObject({ id: uuid, seq: z.int(), prev: hash, recordedAt: instant });

export const verdictSchema = z.strictObject({
  /** Empty only if what was sent has no id that can be read. */
  id: z.string(),
  verdict: z.enum(['recorded', 'already recorded', 'refused', 'waiting']),
  seq: z.int().optional(),
  hash: hash.optional(),
  code: z.string().optional(),
  reason: z.string().optional(),
});

export type EntryVerdict = z.infer<typeof verdictSchema>;

export const trailEntrySchema = z.strictObject({
  recorded: recordedSchema,
  hash,
  /** Null for an entry that the server made for the record itself. */
  signature: z.string().nullable(),
  key: z.string().nullable(),
});

export const syncAnswerSchema = z.strictObject({
  at: instant,
  /** In the order of the entries that were sent. */
  verdicts: z.array(verdictSchema),
  jobs: z.array(
    z.strictObject({
      id: uuid,
      entries: z.array(trailEntrySchema),
      more: z.boolean(),
      head: z.strictObject({ seq: z.int(), hash }).nullable(),
      restored: z.literal(true).optional(),
      gone: z.literal(true).optional(),
    }),
  ),
  workshop: z.int(),
  /** When the server was last restored from a backup: photographs that were sent before may be lost again. */
  restoredAt: instant.nullable(),
  /** Tablet clock minus server clock; more than five minutes is told to the person. */
  clockOffsetMs: z.int(),
});

export type SyncAnswer = z.infer<typeof syncAnswerSchema>;
