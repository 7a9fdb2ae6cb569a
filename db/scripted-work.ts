import { clearanceFromCard } from '@/domain/clearance';
import type { EntryData, EntryKind } from '@/domain/entry';
import { nextTightening } from '@/domain/job';
import { markCount } from '@/domain/job-signing-rules';
import type { JobState, Workshop } from '@/domain/job-state';
import { entryForAction } from '@/domain/job-tightening';
import { oldShells } from '@/domain/job-wear';
import { type Plan, type PlanCheck, type PlanStep, rodsOf, type StepOf } from '@/domain/plan';
import { fitness } from '@/domain/tool';
import type { WearGrade } from '@/domain/wear';

/*
 * What a sensible person would record next on any step of any plan, one entry at a time. The demo's jobs, the
 * tests and the bench are all made by it, through the same code that records real work.
 */

/** Who does it: a technician, or somebody with the right to sign or to judge. */
export type Part = 'technician' | 'supervisor';

/** An entry before it has an author, a number and a signature. */
export type ScriptedEntry = {
  [K in EntryKind]: { kind: K; data: EntryData<K>; step?: string; part: Part; afterMs: number };
}[EntryKind];

/** What the work draws on. */
export interface Kit {
  workshop: Workshop;
  /** The day that tools are judged on, YYYY-MM-DD. */
  today: string;
  photo: (subject: string) => {
    hash: string;
    bytes: number;
    type: 'image/jpeg' | 'image/webp' | 'image/png';
  };
  /** A clearance, mm, for one end of one rod at its nth measurement (from 0); the target's unless given. */
  clearance?: ((rod: number, end: 'front' | 'rear', nth: number) => number | undefined) | undefined;
}

const SECOND = 1000;
const MINUTE = 60 * SECOND;

/** The next entry on a step; undefined when the step needs nothing more, or waits for a signature. */
export function nextScripted(state: JobState, step: PlanStep, kit: Kit): ScriptedEntry | undefined {
  const deviation = state.deviations.find(
    (one) => one.step === step.id && one.blocks && one.disposed === undefined,
  );
  if (deviation !== undefined) {
    const data = { deviation: deviation.id, ...dispositionFor(deviation.rule) };
    return { kind: 'deviation-disposed', data, part: 'supervisor', afterMs: 6 * MINUTE };
  }
  const made = onStep(state, step, kit);
  return made === undefined ? undefined : { ...made, step: step.id };
}

/** What a supervisor would decide: a clearance is brought right, anything else was looked at together. */
function dispositionFor(rule: string | undefined): Omit<EntryData<'deviation-disposed'>, 'deviation'> {
  if (rule === 'clearance-outside') {
    return { disposition: 'rework', reason: 'One grade thicker in the lower half, then measured again.' };
  }
  const customerAgreed = { when: 'the same day', how: 'by telephone' };
  return { disposition: 'accept as is', reason: 'Looked at together: in order as it is.', customerAgreed };
}

function onStep(state: JobState, step: PlanStep, kit: Kit): ScriptedEntry | undefined {
  const part = 'technician';
  switch (step.kind) {
    case 'do':
      return { kind: 'done', data: {}, part, afterMs: 70 * SECOND };
    case 'remove':
      return { kind: 'removed', data: removedData(step), part, afterMs: 3 * MINUTE };
    case 'refit':
      return { kind: 'refitted', data: refittedData(step), part, afterMs: 3 * MINUTE };
    case 'place':
      return { kind: 'placed', data: {}, part, afterMs: 2 * MINUTE };
    case 'count':
      return { kind: 'counted', data: { count: countOf(state, step) }, part, afterMs: 40 * SECOND };
    case 'inspect':
      return { kind: 'inspected', data: { checks: inOrder(step.checks) }, part, afterMs: 90 * SECOND };
    case 'read':
      return { kind: 'read', data: readData(state.plan, step), part, afterMs: 50 * SECOND };
    case 'turn':
      return { kind: 'turned', data: turnedData(step), part, afterMs: 80 * SECOND };
    case 'choose-shells':
      return { kind: 'chose-shells', data: chosenData(state, step), part, afterMs: 60 * SECOND };
    case 'grade-shells':
      return { kind: 'graded', data: gradedData(state), part, afterMs: 90 * SECOND };
    case 'gauge':
      return gauged(state, step, kit);
    case 'tighten':
      return tightened(state, step, kit);
    case 'fit':
      return { kind: 'fitted', data: fittedData(step), part, afterMs: 60 * SECOND };
    case 'fill':
      return { kind: 'filled', data: filledData(state.plan, step), part, afterMs: 5 * MINUTE };
    case 'photograph':
      return { kind: 'photographed', data: photographedData(step, kit), part, afterMs: 45 * SECOND };
    case 'watch':
      return watched(state, step);
    case 'drive':
      return driven(state, step);
    case 'witness':
      return {
        kind: 'witnessed',
        data: { holdPoint: step.holdPoint, meaning: step.meaning },
        part: 'supervisor',
        afterMs: 3 * MINUTE,
      };
    case 'make-safe':
      return { kind: 'parked', data: { checks: inOrder(step.checks) }, part, afterMs: 5 * MINUTE };
    case 'resume':
      return { kind: 'resumed', data: { checks: inOrder(step.checks) }, part, afterMs: 5 * MINUTE };
    case 'hand-over':
      return {
        kind: 'handed-over',
        data: { checks: inOrder(step.checks) },
        part: 'supervisor',
        afterMs: 10 * MINUTE,
      };
    case 'hold':
      return undefined;
  }
}

/** What a signer says at a hold point, except for what it covers. */
export function scriptedSignature(
  state: JobState,
  step: StepOf<'hold'>,
  signer: { name: string; roles: string[] },
): Omit<EntryData<'signed'>, 'covers'> {
  const count = step.counts === undefined ? undefined : markCount(state);
  return {
    holdPoint: step.holdPoint,
    name: signer.name,
    roles: signer.roles,
    meaning: step.meaning.replace('{count}', String(count ?? '')),
    ...(count === undefined ? {} : { count }),
    presence: 'at the vehicle',
  };
}

function removedData(step: StepOf<'remove'>): EntryData<'removed'> {
  return {
    ...(step.count === undefined ? {} : { count: step.count }),
    ...(step.into === undefined ? {} : { into: step.into }),
  };
}

function refittedData(step: StepOf<'refit'>): EntryData<'refitted'> {
  return {
    ...(step.part === undefined ? {} : { lot: lotOf(step.part) }),
    ...(step.count === undefined ? {} : { count: step.count }),
  };
}

function countOf(state: JobState, step: StepOf<'count'>): number {
  return step.side === 'out' ? 12 : (state.tallies[step.tally]?.out ?? 0);
}

function readData(plan: Plan, step: StepOf<'read'>): EntryData<'read'> {
  const limit = plan.limits[step.limit];
  return { value: comfortable(limit), unit: limit?.unit ?? 'mm', how: 'typed' };
}

/** A value that nobody would ask about. */
function comfortable(limit: Plan['limits'][string] | undefined): string {
  if (limit?.target !== undefined) return limit.target;
  const places = Math.max(decimalsOf(limit?.low), decimalsOf(limit?.high));
  if (limit?.low !== undefined && limit.high !== undefined) {
    return ((Number(limit.low) + Number(limit.high)) / 2).toFixed(places);
  }
  if (limit?.low !== undefined) return (Number(limit.low) * 2).toFixed(places);
  if (limit?.high !== undefined) return (Number(limit.high) * 0.8).toFixed(places);
  return '0.20';
}

function decimalsOf(decimal: string | undefined): number {
  return decimal?.split('.')[1]?.length ?? 0;
}

function turnedData(step: StepOf<'turn'>): EntryData<'turned'> {
  return step.toAngle === undefined ? { fullTurns: step.fullTurns ?? 1 } : { toAngle: step.toAngle };
}

function chosenData(state: JobState, step: StepOf<'choose-shells'>): EntryData<'chose-shells'> {
  const { standard, grades } = state.plan.engine.shells;
  const isSecond = (state.rods[step.rod ?? 0]?.voidReadings.length ?? 0) > 0;
  const thicker = grades.find(({ wall }) => Number(wall) > 0)?.grade ?? standard;
  const shell = (grade: string) => ({ grade, lot: lotOf(`shells ${grade}`) });
  return { upper: shell(standard), lower: shell(isSecond ? thicker : standard) };
}

/** Shells of an engine that pulled hard at low speed: the loaded halves are lined, the last two of them worn. */
function gradedData({ plan }: JobState): EntryData<'graded'> {
  const last = rodsOf(plan).length;
  const upper = (rod: number): WearGrade => (rod === 1 ? 0 : rod > last - 2 ? 2 : 1);
  const lower = (rod: number): WearGrade => (rod === last ? 1 : 0);
  const shells = oldShells(plan).map(({ rod, half }) => ({
    ...{ rod, half, grade: half === 'U' ? upper(rod) : lower(rod), flags: [] },
  }));
  return { shells };
}

function fittedData(step: StepOf<'fit'>): EntryData<'fitted'> {
  return { count: step.count, ...(step.lot ? { lot: lotOf(step.part) } : {}) };
}

function filledData(plan: Plan, step: StepOf<'fill'>): EntryData<'filled'> {
  const fluid = plan.fluids[step.fluid];
  return { quantity: fluid?.quantity ?? '1', unit: fluid?.unit ?? 'L', lot: lotOf(step.fluid) };
}

function photographedData(step: StepOf<'photograph'>, kit: Kit): EntryData<'photographed'> {
  const { hash, bytes, type } = kit.photo(step.subject);
  return {
    photo: hash,
    bytes,
    type,
    from: 'camera here',
    subject: step.subject,
    ...(step.identity === true ? { identity: true } : {}),
  };
}

function gauged(state: JobState, step: StepOf<'gauge'>, kit: Kit): ScriptedEntry {
  const rod = step.rod ?? 0;
  const end = state.rods[rod]?.front === undefined ? 'front' : 'rear';
  const { card } = state.plan.engine;
  const bands = card.bands.map((band) => ({ width: Number(band.width), clearance: Number(band.clearance) }));
  const nth = Math.floor((state.rods[rod]?.voidReadings.length ?? 0) / 2);
  const target = Number(state.plan.limits[step.limit]?.target ?? '0.05');
  const width = widthFor(bands, kit.clearance?.(rod, end, nth) ?? target);
  const reading = clearanceFromCard(bands, width);
  const lot = lotOf(card.thread);
  return {
    kind: 'gauged',
    part: 'technician',
    afterMs: 75 * SECOND,
    data: {
      end,
      by: 'width',
      width: width.toFixed(2),
      clearance: reading.clearance.toFixed(3),
      uncertainty: reading.uncertainty.toFixed(4),
      unit: 'mm',
      again: 'first',
      threadLot: lot,
      cardLot: lot,
    },
  };
}

/** The crushed width at which the card reads this clearance, to a hundredth of a millimetre. */
function widthFor(bands: readonly { width: number; clearance: number }[], clearance: number): number {
  const rising = [...bands].sort((a, b) => a.clearance - b.clearance);
  const above = rising.find((band) => band.clearance >= clearance) ?? rising.at(-1);
  const below = rising.findLast((band) => band.clearance <= clearance) ?? rising[0];
  if (above === undefined || below === undefined) throw new RangeError('A card has bands.');
  const part = above === below ? 0 : (clearance - below.clearance) / (above.clearance - below.clearance);
  return Math.round((below.width + part * (above.width - below.width)) * 100) / 100;
}

function tightened(state: JobState, step: StepOf<'tighten'>, kit: Kit): ScriptedEntry | undefined {
  const action = nextTightening(state, step);
  const made = action === null ? undefined : entryForAction(state, step, action);
  if (made === undefined) return undefined;
  const common = { part: 'technician', afterMs: 9 * SECOND } as const;
  switch (made.kind) {
    case 'tightened': {
      const tool = toolFor(made.data.target, step, kit);
      return { ...common, kind: made.kind, data: { ...made.data, ...(tool === undefined ? {} : { tool }) } };
    }
    case 'bolt-replaced':
      return { ...common, kind: made.kind, data: { ...made.data, lot: lotOf('cap bolt') } };
    case 'released':
      return { ...common, kind: made.kind, data: made.data };
    case 'marked':
      return { ...common, kind: made.kind, data: made.data };
  }
}

/** The tool that fits best: in date, and with the value in its range. */
function toolFor(
  target: EntryData<'tightened'>['target'],
  step: StepOf<'tighten'>,
  { workshop, today }: Kit,
): EntryData<'tightened'>['tool'] {
  const use =
    target.kind === 'angle'
      ? { kind: 'angle gauge', criticalClass: step.class }
      : ({
          kind: 'torque wrench',
          criticalClass: step.class,
          value: Number(target.target),
          unit: 'N·m',
        } as const);
  const fit = workshop.tools.filter((tool) => fitness(tool, use, today).reasons.length === 0);
  const tool = fit[0];
  return tool && { id: tool.id, name: tool.name, serial: tool.serial, dueOn: tool.dueOn };
}

function watched(state: JobState, step: StepOf<'watch'>): ScriptedEntry {
  const common = { part: 'technician' } as const;
  const { watch } = state;
  if (watch?.step !== step.id) return { ...common, kind: 'watch-started', data: {}, afterMs: 2 * MINUTE };
  const startedMs = Date.parse(watch.startedAt);
  const elapsedMs = Date.parse(state.lastAt ?? watch.startedAt) - startedMs;
  const answered = answeredChecks(state, step.id, watch.startedAt);
  const check = step.checks.find(({ id }) => !answered.has(id));
  if (check === undefined) {
    const leftMs = Number(step.minutes) * MINUTE - elapsedMs;
    return {
      ...common,
      kind: 'watch-ended',
      data: { early: false },
      afterMs: Math.max(leftMs, 0) + 5 * SECOND,
    };
  }
  const limit = check.limit === undefined ? undefined : state.plan.limits[check.limit];
  const value = limit === undefined ? {} : { value: comfortable(limit), unit: limit.unit };
  const dueMs = check.atSeconds * SECOND - elapsedMs;
  return {
    ...common,
    kind: 'watch-checked',
    data: { check: check.id, ok: true, ...value },
    afterMs: Math.max(dueMs, 0) + 4 * SECOND,
  };
}

function answeredChecks(state: JobState, step: string, since: string): ReadonlySet<string> {
  return new Set(
    (state.steps[step]?.entries ?? []).flatMap((kept) =>
      kept.kind === 'watch-checked' && 'check' in kept.data && kept.at >= since ? [kept.data.check] : [],
    ),
  );
}

function driven(state: JobState, step: StepOf<'drive'>): ScriptedEntry {
  const common = { part: 'technician' } as const;
  const started = state.steps[step.id]?.entries.findLast(({ kind }) => kind === 'drive-started');
  const unit = state.odometer?.unit === 'mi' ? 'mi' : 'km';
  const begun = Number(state.odometer?.value ?? '1000') + 1;
  if (started === undefined) {
    const data = { odometer: String(begun), unit, checks: inOrder(step.before) } as const;
    return { ...common, kind: 'drive-started', data, afterMs: 8 * MINUTE };
  }
  const driven = Math.ceil(
    unit === step.distanceUnit ? Number(step.distance) : Number(step.distance) / 1.609344,
  );
  const data = { odometer: String(begun + driven), unit, checks: inOrder(step.after) } as const;
  return { ...common, kind: 'drive-ended', data, afterMs: 35 * MINUTE };
}

function inOrder(checks: readonly PlanCheck[]): { id: string; ok: boolean }[] {
  return checks.map(({ id }) => ({ id, ok: true }));
}

/** An invented lot that is the same wherever the same part is picked. */
function lotOf(part: string): string {
  let sum = 7;
  for (const letter of part) sum = (sum * 31 + (letter.codePointAt(0) ?? 0)) % 9000;
  return `L${1000 + sum}`;
}
