import * as z from 'zod';
import { IDENTITY_FIELDS } from './job-identity';

/** What the routes of jobs take and answer. */

const hash = z.string().regex(/^[0-9a-f]{64}$/);
const personName = z.strictObject({ id: z.string(), name: z.string() });
export const jobState = z.enum(['open', 'parked', 'handed over', 'ended']);

const jobTablet = z.strictObject({
  id: z.string(),
  name: z.string(),
  state: z.enum(['active', 'lost']),
  lastHeardAt: z.string().nullable(),
  lastRecordedAt: z.string(),
});

const lineShape = {
  id: z.string(),
  number: z.string(),
  label: z.string(),
  engine: z.string(),
  registration: z.string().optional(),
  state: jobState,
  phase: z.enum(['not opened', 'running', 'parked', 'ended unfinished', 'handed over']),
  plan: hash,
  head: z.strictObject({ seq: z.int(), hash }),
  openedAt: z.string(),
  promisedOn: z.string().optional(),
  people: z.array(personName),
  done: z.int(),
  total: z.int(),
  at: z.string().optional(),
  next: z.strictObject({ step: z.string(), title: z.string() }).optional(),
  waiting: z.array(z.strictObject({ step: z.string(), holdPoint: z.string(), title: z.string() })),
  blocks: z.int(),
  working: z.strictObject({ name: z.string(), since: z.string() }).optional(),
  lastAt: z.string().optional(),
};

export const jobLineAnswer = z.strictObject(lineShape);

export const jobSummaryAnswer = z.strictObject({
  ...lineShape,
  openedBy: personName,
  note: z.string().optional(),
  oldParts: z.string().optional(),
  optionWords: z.array(z.strictObject({ ask: z.string(), answer: z.string() })),
  progress: z.array(
    z.strictObject({
      id: z.string(),
      name: z.string(),
      done: z.int(),
      total: z.int(),
      blocked: z.int(),
    }),
  ),
  identity: z.record(z.string(), z.string()),
  /** Fields that are known and not for this person. */
  withheld: z.array(z.string()),
  /** Photographs of the record whose bytes have not come; a handover waits for those that are awaited. */
  missingPhotographs: z.array(
    z.strictObject({
      entry: z.string(),
      hash,
      name: z.string(),
      subject: z.string(),
      at: z.string(),
      tablet: z.string(),
      isAwaited: z.boolean(),
    }),
  ),
  /** Photographs whose very bytes stand in other jobs too: those that the person may see, and how many others. */
  photographsElsewhere: z.array(
    z.strictObject({
      hash,
      jobs: z.array(z.strictObject({ id: z.string(), number: z.string() })),
      others: z.int(),
    }),
  ),
  /** The tablets that recorded in the job, the last first. */
  tablets: z.array(jobTablet),
  /** The folded state, with its plan. */
  jobState: z.looseObject({ plan: z.looseObject({}), phase: z.string(), seq: z.int() }),
});

export const floorJobAnswer = z.strictObject({
  id: z.string(),
  number: z.string(),
  label: z.string(),
  engine: z.string(),
  registration: z.string().optional(),
  plan: hash,
  phase: z.string(),
  head: z.strictObject({ seq: z.int(), hash }),
  /** Ids of the people on the job. */
  people: z.array(z.string()),
  promisedOn: z.string().optional(),
  /** The tablets that recorded in the job, the last first. */
  tablets: z.array(jobTablet),
});

const identityValue = z.strictObject({
  value: z.string().min(1).max(2000),
  /** 16 to 64 random bytes in hex. */
  salt: z.string().regex(/^([0-9a-f]{2}){16,64}$/, 'has to be 16 to 64 bytes in lower-case hex'),
});

const identityShape = Object.fromEntries(
  IDENTITY_FIELDS.map((field) => [field, identityValue.optional()]),
) as Record<(typeof IDENTITY_FIELDS)[number], z.ZodOptional<typeof identityValue>>;

export const openingBody = z.strictObject({
  entry: z.record(z.string(), z.unknown()),
  signature: z.string(),
  key: z.string(),
  identity: z.strictObject(identityShape),
  people: z.array(z.string().max(60)).max(50),
});

export const peopleBody = z.strictObject({ people: z.array(z.string().max(60)).max(50) });
