/*
 * Compiling: a route, its procedures, an engine sheet and the vehicle's options become one flat plan.
 * Documents that passed checkDocuments always compile; anything else throws a RangeError that names
 * what doesn't fit. The same input gives the same plan, byte for byte.
 */
import { turningPlan, type TurningStop } from './crank';
import type { EngineSheet, Procedure, Route } from './document';
import type { DocumentReference, Plan, PlanEngine, PlanLimit, PlanStep } from './plan';
import { expandProcedures, type PlacedStep } from './plan-expand';
import { pairItems, type LooseEnd } from './plan-items';
import { linkSteps, resolveReference } from './plan-needs';
import { buildStep, given } from './plan-step';

export interface CompileInput {
  route: Route;
  /** The procedures that the route names; others are ignored. */
  procedures: Procedure[];
  engine: EngineSheet;
  /** The choice made for each option that the route asks, by option. */
  options: Record<string, string>;
  /** The content hash of each document, by the document's id. */
  hashes: Record<string, string>;
}

/** Compiles released documents and the vehicle's options into a job's plan. */
export function compilePlan(input: CompileInput): Plan {
  const { plan, looseEnds } = assemblePlan(input);
  const [loose] = looseEnds;
  if (loose) throw new RangeError(`"${loose.item}" in step "${loose.step}": ${loose.why}.`);
  return plan;
}

/** The plan together with what would stay open in it for ever; for checks of documents only. */
export function assemblePlan(input: CompileInput): { plan: Plan; looseEnds: LooseEnd[] } {
  const { route, engine, options } = input;
  const optionWords = chosenOptions(route, options);
  const procedures = orderedProcedures(input);
  const stops = turningStops(engine);
  const grades = engine.shells.grades.map(({ grade }) => grade);
  const placed = expandProcedures({ procedures, rods: rodsInOrder(engine), grades, stops, options });
  const steps = buildSteps(placed, input, stops);
  const barsByStep = new Map(placed.map(({ id, step }) => [id, 'bars' in step ? step.bars : undefined]));
  const { items, looseEnds } = pairItems(steps, (id) => barsByStep.get(id));
  const plan: Plan = {
    v: 1,
    route: reference(route, input.hashes),
    engine: planEngine(engine, input.hashes),
    procedures: procedures.map((procedure) => reference(procedure, input.hashes)),
    options: { ...options },
    optionWords,
    stops: stops.map(({ angle, rods }) => ({ angle, rods })),
    ...engineFigures(engine),
    phases: procedures.map(({ id, name, intro }) => ({
      id,
      name,
      ...given({ intro }),
      steps: steps.filter(({ phase }) => phase === id).map((step) => step.id),
    })),
    steps,
    items,
  };
  return { plan, looseEnds };
}

function buildSteps(placed: PlacedStep[], { route, engine }: CompileInput, stops: TurningStop[]): PlanStep[] {
  const covers = new Map(
    placed
      .filter(({ step }) => step.kind === 'hold' || step.kind === 'witness')
      .map((point) => [point.id, coveredSteps(point, placed)]),
  );
  const coversOf = (id: string) => covers.get(id) ?? [];
  const needs = linkSteps(placed, coversOf);
  return placed
    .filter(({ dropped }) => !dropped)
    .map((one) =>
      buildStep(one, { engine, route, stops, needs: needs.get(one.id) ?? [], covers: coversOf(one.id) }),
    );
}

/**
 * The steps whose entries a hold or witness point rests on: those it names, else its procedure up to
 * here. Other hold and witness points are no evidence: who signed them had no hand in the work.
 */
function coveredSteps(point: PlacedStep, placed: PlacedStep[]): string[] {
  const { step, procedure } = point;
  const names = 'covers' in step && step.covers ? step.covers : undefined;
  const before = placed.slice(0, placed.indexOf(point));
  const named = names
    ? new Set(names.flatMap((name) => resolveReference(name, placed, { procedure })))
    : new Set(before.filter((one) => one.procedure === procedure));
  return before
    .filter((one) => named.has(one) && !one.dropped && one.section.onDemand !== true)
    .filter((one) => one.step.kind !== 'hold' && one.step.kind !== 'witness')
    .map(({ id }) => id);
}

function chosenOptions(route: Route, options: Record<string, string>): Plan['optionWords'] {
  const unasked = Object.keys(options).find((id) => !route.options.some((option) => option.id === id));
  if (unasked !== undefined) throw new RangeError(`The route "${route.id}" doesn't ask for "${unasked}".`);
  return route.options.map(({ id, ask, choices }) => {
    const answer = choices.find((choice) => choice.id === options[id]);
    if (!answer) {
      const expected = choices.map((choice) => `"${choice.id}"`).join(', ');
      throw new RangeError(`The option "${id}" must be one of ${expected}.`);
    }
    return { ask, answer: answer.label };
  });
}

function orderedProcedures({ route, procedures }: CompileInput): Procedure[] {
  return route.procedures.map((id) => {
    const found = procedures.find((procedure) => procedure.id === id);
    if (!found)
      throw new RangeError(`The route "${route.id}" names the procedure "${id}", which isn't there.`);
    return found;
  });
}

/** Where the crank stops: each rod within reach of the place short of bottom at which its cap is worked on. */
function turningStops({ crankpins, capOffset, capReach }: EngineSheet): TurningStop[] {
  const ahead = crankpins.map((pin) => ({ ...pin, angle: (pin.angle + capOffset) % 360 }));
  return turningPlan({ crankpins: ahead }, { reach: capReach, start: 0 });
}

function rodsInOrder({ crankpins }: EngineSheet): number[] {
  return crankpins.flatMap(({ rods }) => rods.map(({ rod }) => rod)).sort((a, b) => a - b);
}

function reference(
  { id, revision, name }: { id: string; revision: number; name: string },
  hashes: Record<string, string>,
): DocumentReference {
  const hash = hashes[id];
  if (hash === undefined) throw new RangeError(`The content hash of "${id}" is missing.`);
  return { id, revision, hash, name };
}

function planEngine(engine: EngineSheet, hashes: Record<string, string>): PlanEngine {
  const { code, layout, firingOrder, rotation, crankpins, capBolts, markColour, measuringBolts } = engine;
  const { standard, grades } = engine.shells;
  const { thread, threadDiameter, range, bands } = engine.card;
  return {
    ...reference(engine, hashes),
    code,
    layout,
    firingOrder,
    rotation,
    crankpins,
    capBolts,
    markColour,
    boltSets: engine.boltSets.map(({ set, tightenings }) => ({ set, tightenings })),
    measuringBolts,
    shells: { standard, grades },
    ...(engine.bearing && { bearing: { diameter: engine.bearing.diameter, width: engine.bearing.width } }),
    card: { thread, threadDiameter, range, bands },
  };
}

/** The engine sheet's figures without their sources, which stay in the released document. */
function engineFigures(engine: EngineSheet): Pick<Plan, 'limits' | 'programmes' | 'fluids'> {
  return {
    limits: mapValues(engine.limits, ({ source: _source, title, unit, ...figures }): PlanLimit => ({
      title,
      unit,
      ...given(figures),
    })),
    programmes: mapValues(engine.programmes, ({ title, thread, cycles }) => ({ title, thread, cycles })),
    fluids: mapValues(engine.fluids, ({ title, specification, quantity, unit }) => ({
      title,
      specification,
      quantity,
      unit,
    })),
  };
}

function mapValues<T, U>(record: Record<string, T>, change: (value: T) => U): Record<string, U> {
  return Object.fromEntries(Object.entries(record).map(([name, value]) => [name, change(value)]));
}
