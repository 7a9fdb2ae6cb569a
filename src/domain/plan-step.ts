/*
 * One step of the plan from its place: texts filled in, references to the engine sheet resolved to
 * names and figures, nothing optional left undefined (the plan is hashed).
 */
import type { TurningStop } from './crank';
import type { EngineSheet, ProcedureStep, Route } from './document';
import type { PlanStep } from './plan';
import type { PlacedStep } from './plan-expand';
import { fillText, type StepPlace } from './plan-text';

export interface StepContext {
  engine: EngineSheet;
  route: Route;
  stops: TurningStop[];
  needs: string[];
  /** Steps whose entries are the evidence of a hold or witness point. */
  covers: string[];
}

type Fill = (text: string) => string;

/** The fields that have a value, so that a spread leaves nothing undefined behind. */
export function given<T extends object>(fields: T): { [K in keyof T]?: Exclude<T[K], undefined> } {
  const entries = Object.entries(fields).filter(([, value]) => value !== undefined);
  return Object.fromEntries(entries) as { [K in keyof T]?: Exclude<T[K], undefined> };
}

/** The plan step at this place. */
export function buildStep(placed: PlacedStep, context: StepContext): PlanStep {
  const { step, section, procedure, rod, half } = placed;
  const fill: Fill = (text) => fillText(text, context.engine, placeOf(placed, context));
  return {
    id: placed.id,
    phase: procedure.id,
    section: section.name,
    title: fill(step.title),
    ...given({ why: step.why === undefined ? undefined : fill(step.why) }),
    how: (step.how ?? []).map(fill),
    class: step.class,
    needs: context.needs,
    ...given({ rod, half }),
    cautions: (step.cautions ?? []).map(({ word, text }) => ({ word, text: fill(text) })),
    ...given({ sets: step.sets && given(step.sets) }),
    ...(step.moves && { moves: true as const }),
    ...(section.onDemand && { onDemand: true as const }),
    ...ownFields(placed, context, fill),
  } as PlanStep;
}

function placeOf({ step, rod, half, grade, stop }: PlacedStep, { engine, stops }: StepContext): StepPlace {
  const turning = stop === undefined ? undefined : stops[stop];
  return {
    rod,
    half,
    grade,
    angle: turning?.angle,
    rods: turning?.rods,
    minutes: step.kind === 'watch' ? engine.figures[step.minutes]?.value : undefined,
    distance: step.kind === 'drive' ? engine.figures[step.distance]?.value : undefined,
  };
}

/** `strip.lay-thread` of the same rod, for the steps that send the work back. */
function sibling({ procedure, rod }: PlacedStep, stepId: string): string {
  return `${procedure.id}.${stepId}${rod === undefined ? '' : `@rod${rod}`}`;
}

/** What belongs to the step's kind alone. */
function ownFields(placed: PlacedStep, context: StepContext, fill: Fill): object {
  const { step, rod } = placed;
  const item = (id: string) => (rod === undefined ? id : `${id}@rod${rod}`);
  const asks = (checks: { id: string; ask: string }[]) =>
    checks.map(({ id, ask }) => ({ id, ask: fill(ask) }));
  const { kind } = step;
  switch (kind) {
    case 'do':
    case 'choose-shells':
    case 'grade-shells':
      return { kind };
    case 'remove':
      return {
        kind,
        item: item(step.item),
        ...given({ count: step.count, into: step.into }),
        ...(step.oneUse && { oneUse: true }),
      };
    case 'refit':
      return { kind, item: item(step.item), ...given({ part: step.part, count: step.count }) };
    case 'place':
      return { kind, item: item(step.item) };
    case 'count':
      return { kind, tally: item(step.tally), what: step.what, side: step.side };
    case 'inspect':
    case 'make-safe':
    case 'resume':
    case 'hand-over':
      return { kind, checks: asks(step.checks) };
    case 'read':
      return { kind, limit: step.limit };
    case 'turn':
      return turnFields(placed, step, context);
    case 'gauge':
      return {
        kind,
        limit: step.limit,
        measureAgainFrom: sibling(placed, step.measureAgainFrom),
        reworkFrom: sibling(placed, step.reworkFrom),
      };
    case 'tighten':
      return tightenFields(placed, step, context.engine);
    case 'fit':
      return { kind, part: fill(step.part), count: step.count, lot: step.lot };
    case 'fill':
      return { kind, fluid: step.fluid };
    case 'photograph':
      return { kind, subject: fill(step.subject), ...(step.identity && { identity: true }) };
    case 'watch':
      return watchFields(step, context.engine, fill);
    case 'drive':
      return driveFields(step, context.engine, fill);
    case 'hold':
      return holdFields(step, context);
    case 'witness':
      return { kind, holdPoint: step.holdPoint, meaning: step.meaning, covers: context.covers };
  }
}

type StepFor<K extends ProcedureStep['kind']> = Extract<ProcedureStep, { kind: K }>;

function turnFields({ stop }: PlacedStep, step: StepFor<'turn'>, { stops }: StepContext): object {
  const turning = stop === undefined ? undefined : stops[stop];
  return {
    kind: step.kind,
    ...given({ toAngle: turning?.angle, fullTurns: step.fullTurns }),
    rods: turning?.rods ?? [],
  };
}

function tightenFields({ rod }: PlacedStep, step: StepFor<'tighten'>, engine: EngineSheet): object {
  const common = { kind: step.kind, programme: step.programme, fit: step.fit };
  if (step.fit === 'joint') return { ...common, bolts: step.bolts ?? [] };
  const bolts = engine.capBolts.map(({ bolt }) => `${rod ?? ''}${bolt}`);
  return { ...common, bolts, set: step.fit === 'final' ? 'new' : engine.measuringBolts };
}

function watchFields(step: StepFor<'watch'>, engine: EngineSheet, fill: Fill): object {
  const checks = step.checks.map(({ id, atSeconds, ask, limit, stop }) => ({
    id,
    atSeconds,
    ...given({ ask: ask === undefined ? undefined : fill(ask), limit }),
    ...(stop && { stop: true }),
  }));
  return { kind: step.kind, minutes: figure(engine, step.minutes).value, checks };
}

function driveFields(step: StepFor<'drive'>, engine: EngineSheet, fill: Fill): object {
  const { value, unit } = figure(engine, step.distance);
  const asks = (checks: { id: string; ask: string }[]) =>
    checks.map(({ id, ask }) => ({ id, ask: fill(ask) }));
  return {
    kind: step.kind,
    distance: value,
    distanceUnit: unit,
    before: asks(step.before),
    after: asks(step.after),
  };
}

function holdFields(step: StepFor<'hold'>, { route, covers }: StepContext): object {
  const point = route.holdPoints.find(({ id }) => id === step.holdPoint);
  if (!point)
    throw new RangeError(`The route "${route.id}" doesn't name the hold point "${step.holdPoint}".`);
  return {
    kind: step.kind,
    holdPoint: step.holdPoint,
    meaning: step.meaning,
    ...given({ counts: step.counts, gate: step.gate }),
    covers,
    presence: step.presence,
    roles: point.roles,
    offline: point.offline,
    secondLook: point.secondLook,
  };
}

function figure(engine: EngineSheet, name: string): { value: string; unit: string } {
  const found = engine.figures[name];
  if (!found) throw new RangeError(`The engine sheet "${engine.id}" has no figure "${name}".`);
  return found;
}
