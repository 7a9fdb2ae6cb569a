/*
 * The three kinds of document under revision control: engine sheets, procedures and routes.
 * Read on the server and in the checks only; what reaches a tablet is the compiled plan (plan.ts).
 * Figures are decimal strings, so that a hash of a document never depends on how a number prints.
 */
import { z } from 'zod';

const id = z.string().regex(/^[a-z][a-z0-9-]*$/, 'lower-case words joined by hyphens, such as "oil-pipes"');
const name = z.string().regex(/^[a-z][A-Za-z0-9]*$/, 'one camelCase word, such as "rodClearance"');
const words = z.string().trim().min(1);
const decimal = z.string().regex(/^-?\d+(\.\d+)?$/, 'a decimal in quotation marks, such as "0.050"');
const day = z.string().regex(/^\d{4}-\d{2}-\d{2}$/, 'a day in quotation marks, such as "2026-03-02"');
const count = z.int().min(1).max(999);

/** Where a figure comes from and who compared it with the paper. */
export const sourceSchema = z.strictObject({ document: words, page: words, dated: day, checkedBy: words });

/** A limit of an engine sheet. Without `low` and `high` it reads "no limit known: the supervisor judges". */
export const limitSchema = z.strictObject({
  title: words,
  unit: words,
  low: decimal.optional(),
  high: decimal.optional(),
  target: decimal.optional(),
  /** Expanded uncertainty of the usual way of measuring it. */
  uncertainty: decimal.optional(),
  /** Permitted difference between the ends of one journal, and between rods. */
  taper: decimal.optional(),
  spread: decimal.optional(),
  missing: words.optional(),
  source: sourceSchema.optional(),
});

export const stageSchema = z.discriminatedUnion('kind', [
  z.strictObject({ kind: z.literal('torque'), target: decimal, tolerance: decimal }),
  z.strictObject({ kind: z.literal('angle'), target: decimal, tolerance: decimal }),
  z.strictObject({ kind: z.literal('release') }),
  z.strictObject({ kind: z.literal('mark'), colour: words }),
]);

/** Torque in N·m, angle in degrees. Every bolt of the joint takes a stage before the next begins. */
export const programmeSchema = z.strictObject({
  title: words,
  thread: z.enum(['oiled', 'dry', 'locking compound']),
  cycles: z.array(z.array(stageSchema).min(1)).min(1),
  source: sourceSchema,
});

export const engineSchema = z.strictObject({
  kind: z.literal('engine'),
  id,
  revision: count,
  name: words,
  code: words,
  layout: z.enum(['inline', 'vee']),
  cylinders: count,
  firingOrder: z.array(count).min(1),
  rotation: words,
  /** Degrees in the running direction from pin 1; `bankAxis` is the cylinder's axis from the vertical. */
  crankpins: z
    .array(
      z.strictObject({
        pin: count,
        angle: z.int().min(0).max(359),
        rods: z.array(z.strictObject({ rod: count, bankAxis: z.int().min(-180).max(180) })).min(1),
      }),
    )
    .min(1),
  /** How far short of bottom dead centre a cap is worked on, in degrees; about 30 where thread is gauged. */
  capOffset: z.int().min(0).max(90).default(0),
  /** Half the window around that place in which a cap can be reached, in degrees. */
  capReach: z.int().min(0).max(90),
  /** The bolts of one cap by letter, and where each sits seen from below with the front at the top. */
  capBolts: z.array(z.strictObject({ bolt: z.string().regex(/^[A-D]$/), sits: words })).min(1),
  markColour: words,
  /** Which bolts serve the measuring fit, and how many tightenings a bolt of each set may see. */
  boltSets: z.array(
    z.strictObject({
      set: z.enum(['old', 'measuring', 'new']),
      tightenings: count,
      source: sourceSchema,
    }),
  ),
  measuringBolts: z.enum(['old', 'measuring', 'new']),
  shells: z.strictObject({
    standard: words,
    grades: z
      .array(z.strictObject({ grade: words, /** Change of wall against nominal, mm. */ wall: decimal }))
      .min(1),
    source: sourceSchema,
  }),
  /** Crankpin diameter and the width of a shell that carries, mm: for estimates of the oil film alone. */
  bearing: z.strictObject({ diameter: decimal, width: decimal, source: sourceSchema }).optional(),
  card: z.strictObject({
    thread: words,
    threadDiameter: decimal,
    range: z.strictObject({ low: decimal, high: decimal }),
    bands: z.array(z.strictObject({ width: decimal, clearance: decimal })).min(3),
    source: sourceSchema,
  }),
  limits: z.record(name, limitSchema),
  programmes: z.record(name, programmeSchema),
  fluids: z.record(
    name,
    z.strictObject({
      title: words,
      specification: words,
      quantity: decimal,
      unit: words,
      source: sourceSchema,
    }),
  ),
  figures: z.record(
    name,
    z.strictObject({ title: words, value: decimal, unit: words, source: sourceSchema }),
  ),
});

export const whenSchema = z.strictObject({ option: id, is: z.union([words, z.array(words).min(1)]) });

export const cautionSchema = z.strictObject({
  word: z.enum(['DANGER', 'WARNING', 'CAUTION', 'NOTICE']),
  text: words,
});

/** What an open item bars while it is open. `move` bars lowering or moving the vehicle. */
export const gateSchema = z.enum(['close', 'start', 'move', 'handover']);

/** What doing the step changes on the rod it stands at; the crank may not turn while a rod isn't safe. */
const effectsSchema = z.strictObject({
  cap: z.enum(['off', 'on']).optional(),
  shells: z.enum(['out', 'dry', 'oiled']).optional(),
  thread: z.enum(['laid', 'gone']).optional(),
});

const check = z.strictObject({ id, ask: words });
const common = {
  id,
  title: words,
  /** Why it is done, in one or two sentences. */
  why: words.optional(),
  /** How it is done, a line a sentence. */
  how: z.array(words).optional(),
  class: z.enum(['A', 'B', 'C']).default('C'),
  when: whenSchema.optional(),
  /** Repeats the step; `grade`, for each shell grade of the engine sheet, is for the kit check. */
  each: z.enum(['rod', 'shell', 'grade']).optional(),
  /** Ids of steps of this procedure, or `procedure.step`; given, they replace the section's own order. */
  needs: z.array(words).optional(),
  cautions: z.array(cautionSchema).optional(),
  sets: effectsSchema.optional(),
  /** The step lowers or moves the vehicle. */
  moves: z.boolean().optional(),
};

export const stepSchema = z.discriminatedUnion('kind', [
  z.strictObject({ ...common, kind: z.literal('do') }),
  z.strictObject({
    ...common,
    kind: z.literal('remove'),
    /** A thing that this step takes off, or one that a `place` step put in. */
    item: id,
    count: count.optional(),
    into: words.optional(),
    oneUse: z.boolean().optional(),
    bars: z.array(gateSchema).optional(),
  }),
  z.strictObject({
    ...common,
    kind: z.literal('refit'),
    item: id,
    /** The new part that a one-use item needs; its lot is asked. */
    part: words.optional(),
    count: count.optional(),
  }),
  z.strictObject({ ...common, kind: z.literal('place'), item: id, bars: z.array(gateSchema).min(1) }),
  z.strictObject({
    ...common,
    kind: z.literal('count'),
    tally: id,
    what: words,
    side: z.enum(['out', 'in']),
    bars: z.array(gateSchema).optional(),
  }),
  z.strictObject({ ...common, kind: z.literal('inspect'), checks: z.array(check).min(1) }),
  z.strictObject({ ...common, kind: z.literal('read'), limit: name }),
  z.strictObject({ ...common, kind: z.literal('turn'), fullTurns: count.optional() }),
  z.strictObject({
    ...common,
    kind: z.literal('gauge'),
    limit: name,
    /** Ids of the steps of the same rod from which a new measurement and a rework begin. */
    measureAgainFrom: id,
    reworkFrom: id,
  }),
  z.strictObject({ ...common, kind: z.literal('choose-shells') }),
  /** All old shells of the engine side by side: a grade each, and what else is seen on it. */
  z.strictObject({ ...common, kind: z.literal('grade-shells') }),
  z.strictObject({
    ...common,
    kind: z.literal('tighten'),
    programme: name,
    fit: z.enum(['measuring', 'interim', 'final', 'joint']),
    /** Names of the bolts of a joint that isn't a rod cap; one name may stand for a ring of bolts in order. */
    bolts: z.array(words).min(1).optional(),
  }),
  z.strictObject({
    ...common,
    kind: z.literal('fit'),
    part: words,
    count: count.default(1),
    lot: z.boolean().default(true),
  }),
  z.strictObject({ ...common, kind: z.literal('fill'), fluid: name }),
  z.strictObject({
    ...common,
    kind: z.literal('photograph'),
    subject: words,
    identity: z.boolean().optional(),
  }),
  z.strictObject({
    ...common,
    kind: z.literal('watch'),
    minutes: name,
    checks: z
      .array(
        z.strictObject({
          id,
          /** Seconds after the start at which the check is due. */
          atSeconds: z.int().min(0).max(7200),
          ask: words.optional(),
          limit: name.optional(),
          /** A bad answer means: stop the engine now. */
          stop: z.boolean().optional(),
        }),
      )
      .min(1),
  }),
  z.strictObject({
    ...common,
    kind: z.literal('drive'),
    distance: name,
    before: z.array(check).min(1),
    after: z.array(check).min(1),
  }),
  z.strictObject({
    ...common,
    kind: z.literal('hold'),
    holdPoint: id,
    /** What the signer says; `{count}` is the number that the signer keyed in. */
    meaning: words,
    counts: z.strictObject({ what: words, expect: z.enum(['marks']) }).optional(),
    gate: gateSchema.optional(),
    /** Procedures, sections or steps whose entries are the evidence; default: this procedure up to here. */
    covers: z.array(words).optional(),
    presence: z.enum(['vehicle', 'either']).default('vehicle'),
  }),
  z.strictObject({
    ...common,
    kind: z.literal('witness'),
    holdPoint: id,
    meaning: words,
    covers: z.array(words).optional(),
  }),
  z.strictObject({ ...common, kind: z.literal('make-safe'), checks: z.array(check).min(1) }),
  z.strictObject({ ...common, kind: z.literal('resume'), checks: z.array(check).min(1) }),
  z.strictObject({ ...common, kind: z.literal('hand-over'), checks: z.array(check).min(1) }),
]);

export const sectionSchema = z.strictObject({
  id,
  name: words,
  /** `listed`: each step needs the one before it; `free`: any order within the section. */
  order: z.enum(['listed', 'free']).default('listed'),
  /** `rods`: the steps are repeated at each turning stop of the crank, for each rod that it brings down. */
  loop: z.literal('rods').optional(),
  /** Ids that must be done before the section; default: the section before it. */
  needs: z.array(words).optional(),
  when: whenSchema.optional(),
  /** Steps that are there when they are wanted (park, resume) and never in anybody's way. */
  onDemand: z.boolean().optional(),
  steps: z.array(stepSchema).min(1),
});

export const procedureSchema = z.strictObject({
  kind: z.literal('procedure'),
  id,
  revision: count,
  name: words,
  intro: words.optional(),
  sections: z.array(sectionSchema).min(1),
});

export const routeSchema = z.strictObject({
  kind: z.literal('route'),
  id,
  revision: count,
  name: words,
  engine: id,
  procedures: z.array(id).min(1),
  /** Vehicle options to ask when a job is opened. */
  options: z.array(
    z.strictObject({ id, ask: words, choices: z.array(z.strictObject({ id: words, label: words })).min(2) }),
  ),
  holdPoints: z.array(
    z.strictObject({
      id,
      name: words,
      roles: z.array(z.enum(['supervisor', 'quality lead'])).min(1),
      /** May work go on while a signature made offline is still unchecked? */
      offline: z.enum(['wait', 'proceed']),
      /** Where nobody else is there: a second look by the same person at least 30 minutes later. */
      secondLook: z.boolean(),
    }),
  ),
});

export const documentSchema = z.discriminatedUnion('kind', [engineSchema, procedureSchema, routeSchema]);

export type EngineSheet = z.infer<typeof engineSchema>;
export type Procedure = z.infer<typeof procedureSchema>;
export type ProcedureSection = z.infer<typeof sectionSchema>;
export type ProcedureStep = z.infer<typeof stepSchema>;
export type Route = z.infer<typeof routeSchema>;
export type WorkshopDocument = z.infer<typeof documentSchema>;
