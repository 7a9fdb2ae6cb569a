import fc from 'fast-check';
import * as z from 'zod/mini';
import { type Entry, entryData, type EntryKind } from '@/domain/entry';
import type { JobState, Kept, Workshop } from '@/domain/job-state';
import type { PlanStep, StepKind } from '@/domain/plan';

/*
 * Entries of every form that the schemas let in, sensible or not: the values come out of a pool of names that
 * mean something in the job and of values at the edge of what their schema takes.
 */

const AWKWARD = ['constructor', '__proto__', 'toString', ' ', 'é', '🔩', 'x'.repeat(60), '@rod1', ':'];
const DECIMALS = ['0', '-1', '0.000', '-0.005', '0.048', '10', '80', '999999999.999999', '-999999999.999999'];
const INSTANTS = [
  '2026-06-02T08:00:00Z',
  '2026-06-02T08:00:00.5Z',
  '0000-01-01T00:00:00Z',
  '0005-03-01T00:00:00Z',
  '9999-12-31T23:59:59.999Z',
  '1969-12-31T23:59:59.999Z',
];
const DAYS = ['2026-12-31', '2026-02-31', '0000-00-00', '9999-12-31'];
const COUNTS = [0, 1, 2, 3, 4, 12, 1_000_000, Number.MAX_SAFE_INTEGER];

/** What is done on a step of each kind; other kinds of entry belong to any step or to none. */
const KINDS_ON = {
  do: ['done'],
  remove: ['removed'],
  refit: ['refitted'],
  place: ['placed'],
  count: ['counted'],
  inspect: ['inspected'],
  read: ['read'],
  turn: ['turned'],
  gauge: ['gauged', 'measuring-again'],
  'choose-shells': ['chose-shells'],
  'grade-shells': ['graded'],
  tighten: ['tightened', 'released', 'marked', 'started-again', 'bolt-replaced'],
  fit: ['fitted'],
  fill: ['filled'],
  photograph: ['photographed'],
  watch: ['watch-started', 'watch-checked', 'watch-ended'],
  drive: ['drive-started', 'drive-ended'],
  hold: ['signed'],
  witness: ['witnessed'],
  'make-safe': ['parked'],
  resume: ['resumed'],
  'hand-over': ['handed-over'],
} as const satisfies Record<StepKind, EntryKind[]>;

/** Any entry that could come into this job, in whatever state the job is; half of them where work stands. */
export function anyEntry(state: JobState, workshop: Workshop): fc.Arbitrary<Entry> {
  const pool = textsOf(state, workshop);
  const kinds = Object.keys(entryData) as EntryKind[];
  const steps = [undefined, '__proto__', ...state.plan.steps.map(({ id }) => id)];
  const anywhere = fc.record({ kind: fc.constantFrom(...kinds), step: fc.constantFrom(...steps) });
  const here = fc
    .constantFrom(...stepsAtWork(state))
    .chain(({ id, kind }) =>
      fc.record({ kind: fc.constantFrom<EntryKind>(...KINDS_ON[kind]), step: fc.constant(id) }),
    );
  const made = new Map(kinds.map((kind) => [kind, dataOf(kind, state, pool)]));
  return fc
    .oneof(anywhere, here)
    .chain(({ kind, step }) =>
      entryOf(state, workshop, { kind, step, data: made.get(kind) ?? fc.constant({}) }),
    );
}

/** An entry that was in order, with one thing about it changed into something else that its schema takes. */
export function nearly(entry: Entry, state: JobState, workshop: Workshop): fc.Arbitrary<Entry> {
  const pool = textsOf(state, workshop);
  const { def } = (entryData[entry.kind] as z.core.$ZodTypes)._zod;
  const shape = def.type === 'object' ? Object.entries(def.shape) : [];
  const changed = shape.map(([name, one]) =>
    valueOf(one, pool).map((value) => {
      const rest = Object.entries(entry.data).filter(([other]) => other !== name);
      const data = Object.fromEntries(value === undefined ? rest : [...rest, [name, value]]);
      return { ...entry, data } as Entry;
    }),
  );
  const at = fc.constantFrom(...INSTANTS).map((instant) => ({ ...entry, at: instant }));
  return fc.oneof(at, ...changed);
}

function dataOf(kind: EntryKind, state: JobState, pool: readonly string[]): fc.Arbitrary<unknown> {
  const isCorrection = kind === 'corrected' && keptIn(state).length > 0;
  return isCorrection ? correctionIn(state, pool) : valueOf(entryData[kind], pool);
}

/** A correction of something that is there, in the form of what it corrects. */
function correctionIn(state: JobState, pool: readonly string[]): fc.Arbitrary<unknown> {
  const byKind = new Map<EntryKind, string[]>();
  for (const { id, kind } of keptIn(state)) byKind.set(kind, [...(byKind.get(kind) ?? []), id]);
  const corrections = [...byKind].map(([kind, ids]) =>
    fc.record({
      of: fc.constantFrom(...ids),
      class: fc.constantFrom('clerical', 'substantive'),
      reason: fc.constant('misread'),
      data: valueOf(entryData[kind], pool),
    }),
  );
  return fc.oneof(...corrections);
}

function keptIn(state: JobState): Kept[] {
  return [...Object.values(state.steps).flatMap(({ entries }) => entries), ...state.unstepped];
}

interface Made {
  kind: EntryKind;
  step: string | undefined;
  data: fc.Arbitrary<unknown>;
}

function entryOf(state: JobState, workshop: Workshop, { kind, step, data }: Made): fc.Arbitrary<Entry> {
  const person = fc.constantFrom(...workshop.people, { id: 'nobody', name: 'Nobody', roles: [] });
  return fc
    .record({
      id: fc.uuid({ version: 7 }),
      person,
      with: fc.array(
        person.map(({ id }) => id),
        { maxLength: 2 },
      ),
      device: fc.constantFrom('tablet-1', 'server', '__proto__'),
      at: fc.constantFrom(...INSTANTS),
      data,
      number: fc.nat({ max: 1000 }),
    })
    .map(({ person: { id: by, name, roles }, data: made, number, ...rest }) => ({
      ...rest,
      v: 1,
      job: state.job ?? '0190a0a0-0000-7000-8000-00000000aaaa',
      plan: 'a'.repeat(64),
      basis: 0,
      workshop: workshop.seq,
      kind,
      ...(step === undefined ? {} : { step }),
      by,
      author: { name, roles },
      deviceSeq: number + 1,
      data: made,
    })) as fc.Arbitrary<Entry>;
}

/** The steps that were worked on last and those that come next. */
function stepsAtWork({ plan, steps }: JobState): PlanStep[] {
  const begun = plan.steps.filter(({ id }) => (steps[id]?.entries.length ?? 0) > 0);
  const open = plan.steps.filter(({ id }) => steps[id]?.status === 'open');
  return [...begun.slice(-3), ...open.slice(0, 3)];
}

/** Every name that means something in the job, and some that should not. */
function textsOf(state: JobState, workshop: Workshop): string[] {
  const { plan } = state;
  const checks = plan.steps.flatMap((step) => ('checks' in step ? step.checks.map(({ id }) => id) : []));
  const holds = plan.steps.flatMap((step) => (step.kind === 'hold' ? [step.holdPoint] : []));
  return [
    ...keptIn(state)
      .slice(-40)
      .map(({ id }) => id),
    ...state.deviations.map(({ id }) => id),
    ...Object.keys(state.bolts),
    ...plan.engine.shells.grades.map(({ grade }) => grade),
    ...checks.slice(0, 5),
    ...holds,
    ...workshop.tools.flatMap(({ id, serial }) => [id, serial]),
    ...DECIMALS,
    ...DAYS,
    'a'.repeat(64),
    '0190a0a0-0000-7000-8000-00000000ffff',
    ...AWKWARD,
  ];
}

/** A value that a schema takes; strings and numbers out of the pools, as far as the schema takes them. */
function valueOf(schema: z.core.$ZodType, pool: readonly string[]): fc.Arbitrary<unknown> {
  const inner = (one: z.core.$ZodType) => valueOf(one, pool);
  const { def } = (schema as z.core.$ZodTypes)._zod;
  switch (def.type) {
    case 'object':
      return objectOf(def.shape, inner);
    case 'array':
      return fc
        .array(inner(def.element), { maxLength: 4 })
        .filter((list) => z.safeParse(schema, list).success);
    case 'record':
      return fc.dictionary(fc.constantFrom(...pool), inner(def.valueType), { maxKeys: 3 });
    case 'union':
      return fc.oneof(...def.options.map(inner));
    case 'nullable':
      return fc.option(inner(def.innerType));
    case 'optional':
      return fc.option(inner(def.innerType), { nil: undefined });
    case 'literal':
      return fc.constantFrom(...def.values);
    case 'enum':
      return fc.constantFrom(...Object.values(def.entries));
    case 'boolean':
      return fc.boolean();
    case 'unknown':
      return fc.jsonValue({ maxDepth: 2 });
    case 'string':
      return among(schema, pool);
    case 'number':
      return among(schema, COUNTS);
    default:
      throw new RangeError(`No values are made for a schema of type ${def.type} yet.`);
  }
}

function objectOf(
  shape: Readonly<Record<string, z.core.$ZodType>>,
  inner: (one: z.core.$ZodType) => fc.Arbitrary<unknown>,
): fc.Arbitrary<unknown> {
  const optional = new Set<string>();
  const fields = Object.entries(shape).map(([name, one]) => {
    const { def } = (one as z.core.$ZodTypes)._zod;
    if (def.type !== 'optional') return [name, inner(one)] as const;
    optional.add(name);
    return [name, inner(def.innerType)] as const;
  });
  const required = fields.map(([name]) => name).filter((name) => !optional.has(name));
  return fc.record(Object.fromEntries(fields), { requiredKeys: required as never[] });
}

function among<T>(schema: z.core.$ZodType, values: readonly T[]): fc.Arbitrary<T> {
  const taken = values.filter((value) => z.safeParse(schema, value).success);
  if (taken.length === 0) throw new RangeError('The pool has no value for one of the schemas.');
  return fc.constantFrom(...taken);
}
