import * as z from 'zod/mini';
import type { JobState } from '@/domain/job-state';

const named = z.object({ id: z.string(), name: z.string() });
const text = z.optional(z.string());

const line = {
  id: z.string(),
  number: z.string(),
  label: z.string(),
  engine: z.string(),
  registration: text,
  state: z.string(),
  phase: z.string(),
  openedAt: z.string(),
  promisedOn: text,
  people: z.array(named),
  done: z.number(),
  total: z.number(),
  at: text,
  next: z.optional(z.object({ step: z.string(), title: z.string() })),
  waiting: z.array(z.object({ step: z.string(), holdPoint: z.string(), title: z.string() })),
  blocks: z.number(),
  working: z.optional(z.object({ name: z.string(), since: z.string() })),
  lastAt: text,
};

/** A page of the list of jobs, as far as the desk shows it. */
export const jobListAnswer = z.object({ jobs: z.array(z.object(line)), cursor: text });
export type JobLine = z.infer<typeof jobListAnswer>['jobs'][number];

/** One job, as far as its page shows it. */
export const jobAnswer = z.object({
  ...line,
  openedBy: named,
  note: text,
  oldParts: text,
  optionWords: z.array(z.object({ ask: z.string(), answer: z.string() })),
  progress: z.array(
    z.object({ id: z.string(), name: z.string(), done: z.number(), total: z.number(), blocked: z.number() }),
  ),
  identity: z.record(z.string(), z.string()),
  withheld: z.array(z.string()),
  missingPhotographs: z.array(
    z.object({
      entry: z.string(),
      name: z.string(),
      subject: z.string(),
      at: z.string(),
      tablet: z.string(),
      isAwaited: z.boolean(),
    }),
  ),
  photographsElsewhere: z.array(
    z.object({
      hash: z.string(),
      jobs: z.array(z.object({ id: z.string(), number: z.string() })),
      others: z.number(),
    }),
  ),
  tablets: z.array(z.object({ id: z.string(), name: z.string() })),
  jobState: z.custom<JobState>(
    (value: unknown) => typeof value === 'object' && value !== null && 'steps' in value,
  ),
});
export type JobAnswer = z.infer<typeof jobAnswer>;
export type PhotographElsewhere = JobAnswer['photographsElsewhere'][number];
export type MissingPhotograph = JobAnswer['missingPhotographs'][number];
