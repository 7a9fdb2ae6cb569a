/*
 * An entry is what a person did, once. Its content hash and the author's signature are made over
 * exactly this JSON, so a field is never renamed and never changes its meaning: a new form is a new `v`.
 * Measured values are decimal strings as read; the only numbers are safe integers.
 * zod/mini, because the Floor carries this module.
 */
import * as z from 'zod/mini';
import { instant } from '@/domain/instant';
import { WEAR_FLAGS } from '@/domain/wear';

const text = (max: number) => z.string().check(z.minLength(1), z.maxLength(max));
const uuid = z
  .string()
  .check(z.regex(/^[0-9a-f]{8}-[0-9a-f]{4}-[1-8][0-9a-f]{3}-[89ab][0-9a-f]{3}-[0-9a-f]{12}$/));
const sha256Hex = z.string().check(z.regex(/^[0-9a-f]{64}$/));
const decimal = z.string().check(z.regex(/^-?\d{1,9}(\.\d{1,6})?$/));
const whole = z.int().check(z.minimum(0));
const note = text(2000);
const lot = text(60);

/** How a value came: said, keyed in, or sent by the tool. "Said is not measured." */
const how = z.enum(['confirmed', 'typed', 'from the tool']);

/** A tool as it was used: enough to judge it years later. */
const toolUsed = z.strictObject({
  id: text(60),
  name: text(80),
  serial: text(60),
  dueOn: z.nullable(z.string().check(z.regex(/^\d{4}-\d\d-\d\d$/))),
});

const answers = z.array(z.strictObject({ id: text(60), ok: z.boolean(), note: z.optional(note) }));
const shell = z.strictObject({ grade: text(40), lot });
const place = z.strictObject({ bolt: text(40), cycle: whole, stage: whole });

const stageTarget = z.union([
  z.strictObject({ kind: z.literal('torque'), target: decimal, unit: z.literal('N·m'), tolerance: decimal }),
  z.strictObject({ kind: z.literal('angle'), target: decimal, unit: z.literal('deg'), tolerance: decimal }),
]);

const coverage = z.strictObject({
  /** The last `deviceSeq` of each tablet that the evidence reaches. */
  upTo: z.record(z.string(), whole),
  count: whole,
  /** SHA-256 over the sorted content hashes of the evidence. */
  digest: sha256Hex,
});

/**
 * The data of each kind of entry. `act`: a physical act, recorded even where it conflicts.
 * `judgement`: refused when its ground has changed. `office`: made by the server for the record itself.
 */
export const entryData = {
  // The job
  opened: z.strictObject({
    number: text(20),
    engine: text(80),
    options: z.record(z.string(), text(80)),
    odometer: z.strictObject({ value: decimal, unit: z.enum(['km', 'mi']) }),
    /** HMAC-SHA-256 under a random salt each; the values are kept beside the trail. */
    commitments: z.record(z.string(), sha256Hex),
    oldParts: text(200),
    promisedOn: z.optional(text(30)),
    note: z.optional(note),
  }),
  'took-over': z.strictObject({
    from: z.optional(text(60)),
    note: z.optional(note),
    firstOfShift: z.boolean(),
  }),
  'tool-taken': z.strictObject({ use: z.enum(['torque', 'angle', 'measuring']), tool: toolUsed }),
  // Steps
  done: z.strictObject({ note: z.optional(note) }),
  removed: z.strictObject({ count: z.optional(whole), into: z.optional(text(120)) }),
  refitted: z.strictObject({ lot: z.optional(lot), count: z.optional(whole) }),
  placed: z.strictObject({}),
  counted: z.strictObject({ count: whole }),
  inspected: z.strictObject({ checks: answers, note: z.optional(note) }),
  read: z.strictObject({ value: decimal, unit: text(20), how, tool: z.optional(toolUsed) }),
  turned: z.strictObject({ toAngle: z.optional(whole), fullTurns: z.optional(whole) }),
  'chose-shells': z.strictObject({
    upper: shell,
    lower: shell,
    predicted: z.optional(decimal),
    /** The grades that the tablet proposed; other ones are put in with a reason only. */
    proposed: z.optional(z.strictObject({ upper: text(40), lower: text(40) })),
    /** What lay on the shelf before these were taken, as it was counted for the proposal. */
    stock: z.optional(
      z.array(z.strictObject({ grade: text(40), half: z.enum(['upper', 'lower', 'either']), count: whole })),
    ),
    reason: z.optional(note),
  }),
  /** The old shells side by side; each of the engine once. */
  graded: z.strictObject({
    shells: z
      .array(
        z.strictObject({
          rod: z.int().check(z.minimum(1), z.maximum(99)),
          half: z.enum(['U', 'L']),
          grade: z.literal([0, 1, 2, 3, 4]),
          flags: z.array(z.enum(WEAR_FLAGS)).check(z.maxLength(WEAR_FLAGS.length)),
        }),
      )
      .check(z.minLength(1), z.maxLength(99)),
  }),
  gauged: z.strictObject({
    end: z.enum(['front', 'rear']),
    by: z.enum(['band', 'width', 'parts']),
    width: z.optional(decimal),
    clearance: decimal,
    uncertainty: decimal,
    unit: z.literal('mm'),
    again: z.enum(['first', 'read again', 'measure again']),
    /** The thread and its own card; none where it was measured by parts. */
    threadLot: z.optional(lot),
    cardLot: z.optional(lot),
    /** By parts: the sizes that the clearance is the sum of, mm. */
    parts: z.optional(
      z.strictObject({ housingBore: decimal, upperWall: decimal, lowerWall: decimal, journal: decimal }),
    ),
  }),
  /** New thread, one more tightening: the rod goes back to where its measurement began. */
  'measuring-again': z.strictObject({ reason: z.optional(note) }),
  tightened: z.strictObject({
    ...place.shape,
    target: stageTarget,
    how,
    value: z.optional(decimal),
    outcome: z.enum(['done', 'short and continued', 'over']),
    tool: z.optional(toolUsed),
  }),
  /** By the programme at a cycle's end, or out of turn (a partner of a condemned bolt) with the reason. */
  released: z.strictObject({ ...place.shape, because: z.optional(note) }),
  marked: z.strictObject({ ...place.shape, colour: text(30) }),
  /** "Not sure whether it was turned": all bolts of the cap let off, the cap starts again. */
  'started-again': z.strictObject({ bolts: z.array(text(40)).check(z.minLength(1)), reason: note }),
  'bolt-replaced': z.strictObject({ bolt: text(40), lot: z.optional(lot), reason: note }),
  fitted: z.strictObject({ count: whole, lot: z.optional(lot), number: z.optional(text(60)) }),
  filled: z.strictObject({ quantity: decimal, unit: text(20), lot: z.optional(lot) }),
  photographed: z.strictObject({
    photo: sha256Hex,
    bytes: whole,
    type: z.enum(['image/jpeg', 'image/webp', 'image/png']),
    from: z.enum(['camera here', 'from file']),
    subject: text(200),
    identity: z.optional(z.boolean()),
  }),
  'watch-started': z.strictObject({}),
  'watch-checked': z.strictObject({
    check: text(60),
    ok: z.boolean(),
    value: z.optional(decimal),
    unit: z.optional(text(20)),
    note: z.optional(note),
  }),
  'watch-ended': z.strictObject({ early: z.boolean(), reason: z.optional(note) }),
  'drive-started': z.strictObject({ odometer: decimal, unit: z.enum(['km', 'mi']), checks: answers }),
  'drive-ended': z.strictObject({ odometer: decimal, unit: z.enum(['km', 'mi']), checks: answers }),
  // Signing
  signed: z.strictObject({
    holdPoint: text(60),
    name: text(120),
    roles: z.array(text(40)),
    meaning: text(600),
    count: z.optional(whole),
    presence: z.enum(['at the vehicle', 'from photographs']),
    covers: coverage,
    /** A second look by the same person, with the reason; reads "not independent". */
    notIndependent: z.optional(note),
    /** By which certificate they sign, where the workshop has one of theirs. */
    certificate: z.optional(z.strictObject({ number: text(60), kind: text(60) })),
  }),
  witnessed: z.strictObject({ holdPoint: text(60), meaning: text(600) }),
  'work-signed': z.strictObject({ covers: coverage }),
  countersigned: z.strictObject({ of: uuid, name: text(120) }),
  // Deviations
  'deviation-raised': z.strictObject({
    class: z.enum(['A', 'B', 'C']),
    words: note,
    /** Steps that may not go on; none for a remark. */
    blocks: z.boolean(),
    rod: z.optional(whole),
  }),
  'deviation-disposed': z.strictObject({
    deviation: text(80),
    disposition: z.enum(['rework', 'replace', 'accept as is', 'scrap']),
    reason: note,
    /** Accepting outside limits needs the customer's word: who, when, how. */
    customerAgreed: z.optional(z.strictObject({ when: text(40), how: text(120) })),
  }),
  // Honest ways out
  'not-applicable': z.strictObject({ reason: note }),
  'waiting-for-part': z.strictObject({ part: text(120), note: z.optional(note) }),
  'part-arrived': z.strictObject({ lot: z.optional(lot) }),
  'extra-work': z.strictObject({
    words: note,
    approval: z.strictObject({ who: z.enum(['customer', 'named person']), when: text(40), how: text(120) }),
  }),
  parked: z.strictObject({ checks: answers, note: z.optional(note) }),
  resumed: z.strictObject({ checks: answers, note: z.optional(note) }),
  'ended-unfinished': z.strictObject({ reason: note, open: z.array(text(200)), notToBeRun: z.literal(true) }),
  'handed-over': z.strictObject({ checks: answers, note: z.optional(note) }),
  // Corrections
  corrected: z.strictObject({
    of: uuid,
    class: z.enum(['clerical', 'substantive']),
    reason: note,
    /** The data of the earlier entry's kind, whole, as it should have read. */
    data: z.record(z.string(), z.unknown()),
  }),
  'taken-back': z.strictObject({
    of: uuid,
    which: z.enum(['touched by mistake, not done', 'done, but wrong']),
    reason: z.optional(note),
  }),
  revoked: z.strictObject({ of: uuid, reason: note }),
  'plan-moved': z.strictObject({
    to: sha256Hex,
    reason: note,
    kept: z.array(text(120)),
    voided: z.array(text(120)),
  }),
  // Made by the server for the record itself; carries no author's signature.
  refused: z.strictObject({ content: sha256Hex, code: text(60), reason: note, author: z.optional(text(60)) }),
  'tablet-lost': z.strictObject({ tablet: uuid, from: whole }),
  restored: z.strictObject({ after: whole, reason: note }),
  /** Personal fields and marked photographs that were deleted; what is left proves that they were. */
  erased: z.strictObject({
    fields: z.array(text(40)),
    photographs: z.array(sha256Hex),
    reason: note,
    /** Who decided it. */
    decidedBy: text(60),
  }),
} as const;

export type EntryKind = keyof typeof entryData;
export type EntryData<K extends EntryKind> = z.infer<(typeof entryData)[K]>;

/** Kinds that only the server makes. */
export const officeKinds = ['refused', 'tablet-lost', 'restored', 'erased'] as const satisfies EntryKind[];

/** Judgements bind to evidence and are refused when it changed; every other kind records what happened. */
export const judgementKinds = [
  'signed',
  'countersigned',
  'deviation-disposed',
  'handed-over',
  'plan-moved',
  'revoked',
] as const satisfies EntryKind[];

export const envelopeSchema = z.strictObject({
  v: z.literal(1),
  id: uuid,
  job: uuid,
  /** Hash of the plan that the entry was made under. */
  plan: sha256Hex,
  /** The last `seq` of the job that the tablet had. */
  basis: whole,
  /** The `seq` of the workshop's trail that people and tools were judged by. */
  workshop: whole,
  kind: z.string(),
  step: z.optional(text(120)),
  by: text(60),
  author: z.strictObject({ name: text(120), roles: z.array(text(40)) }),
  /** Ids of the others who had a hand in it; they count as authors. */
  with: z.array(text(60)),
  device: text(60),
  deviceSeq: z.int().check(z.minimum(1)),
  at: instant,
  data: z.record(z.string(), z.unknown()),
  /** Recorded afterwards: when it was really done, and why it was written later. */
  afterwards: z.optional(z.strictObject({ when: text(60), reason: note })),
});

type Envelope = z.infer<typeof envelopeSchema>;

/** One entry of a kind. */
export type EntryOf<K extends EntryKind> = Omit<Envelope, 'kind' | 'data'> & { kind: K; data: EntryData<K> };

/** Any entry; narrow it by `kind`. */
export type Entry = { [K in EntryKind]: EntryOf<K> }[EntryKind];

/** What the server adds when it records an entry. */
export interface RecordedFields {
  seq: number;
  recordedAt: string;
  prev: string;
  /** Tablet clock minus server clock at receipt, milliseconds. */
  clockOffsetMs: number;
  /** When a sealed PIN was opened and found right. */
  pin?: { keyId: string; checkedAt: string } | undefined;
  /** Why the entry could not be in order here although it was on its own tablet. */
  conflict?: { code: string; why: string } | undefined;
}

export type Recorded<E = Entry> = E & RecordedFields;

export type ParsedEntry =
  | { ok: true; entry: Entry }
  /** Well-formed, but of a version this program doesn't know. */
  | { ok: false; newer: true; v: number }
  | { ok: false; newer: false; field: string; why: string };

function isEntryKind(kind: string): kind is EntryKind {
  return Object.hasOwn(entryData, kind);
}

/** Reads one entry of unknown origin; never throws. */
export function parseEntry(input: unknown): ParsedEntry {
  const v = typeof input === 'object' && input !== null && 'v' in input ? input.v : undefined;
  if (typeof v === 'number' && Number.isSafeInteger(v) && v > 1) return { ok: false, newer: true, v };
  const envelope = z.safeParse(envelopeSchema, input);
  if (!envelope.success) return malformed(envelope.error.issues, []);
  const { kind } = envelope.data;
  if (!isEntryKind(kind))
    return { ok: false, newer: false, field: 'kind', why: `there is no kind of entry "${kind}"` };
  const data = z.safeParse(entryData[kind], envelope.data.data);
  if (!data.success) return malformed(data.error.issues, ['data']);
  return { ok: true, entry: { ...envelope.data, kind, data: data.data } as Entry };
}

function malformed(
  issues: readonly { path: PropertyKey[]; message: string }[],
  prefix: string[],
): ParsedEntry {
  const [first] = issues;
  return {
    ok: false,
    newer: false,
    field: [...prefix, ...(first?.path ?? [])].map(String).join('.') || 'entry',
    why: first?.message ?? 'malformed',
  };
}
