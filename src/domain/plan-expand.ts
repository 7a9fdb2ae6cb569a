/*
 * Expansion: each step of the procedures as often as the engine asks for it, in the order of the plan.
 * Steps that the vehicle's options drop stay in the list as `dropped`, so that what needed them can be
 * linked over the gap (plan-needs.ts).
 */
import type { TurningStop } from './crank';
import type { Procedure, ProcedureSection, ProcedureStep } from './document';
import type { ShellHalf } from './plan';

/** One step at its place in the plan, before its texts are filled in. */
export interface PlacedStep {
  id: string;
  procedure: Procedure;
  section: ProcedureSection;
  step: ProcedureStep;
  rod?: number;
  half?: ShellHalf;
  /** Shell grade, in a step for each of them. */
  grade?: string;
  /** Index of the turning stop, in a section that loops over the rods. */
  stop?: number;
  dropped: boolean;
}

export interface ExpandInput {
  procedures: Procedure[];
  rods: number[];
  /** The engine sheet's shell grades. */
  grades: string[];
  stops: TurningStop[];
  options: Record<string, string>;
}

/** Whether a vehicle with these options has what `when` asks for. */
export function holds(when: ProcedureSection['when'], options: Record<string, string>): boolean {
  if (!when) return true;
  const chosen = options[when.option];
  return typeof when.is === 'string' ? when.is === chosen : when.is.some((choice) => choice === chosen);
}

/** All steps of all procedures in the order of the plan. */
export function expandProcedures(input: ExpandInput): PlacedStep[] {
  return input.procedures.flatMap((procedure) =>
    procedure.sections.flatMap((section) =>
      section.loop === 'rods'
        ? expandLoop(procedure, section, input)
        : section.steps.flatMap((step) => expandStep(procedure, section, step, input)),
    ),
  );
}

function expandLoop(procedure: Procedure, section: ProcedureSection, input: ExpandInput): PlacedStep[] {
  const turns = section.steps.filter((step) => step.kind === 'turn');
  const work = section.steps.filter((step) => step.kind !== 'turn');
  return input.stops.flatMap(({ rods }, stop) => [
    ...turns.map((step) => ({
      id: `${procedure.id}.${step.id}@stop${stop + 1}`,
      procedure,
      section,
      step,
      stop,
      dropped: isDropped(section, step, input.options),
    })),
    ...rods.flatMap((rod) =>
      work.flatMap((step) =>
        expandStep(procedure, section, { ...step, each: step.each ?? 'rod' }, { ...input, rods: [rod] }).map(
          (placed) => ({ ...placed, step, stop }),
        ),
      ),
    ),
  ]);
}

function expandStep(
  procedure: Procedure,
  section: ProcedureSection,
  step: ProcedureStep,
  { rods, grades, options }: ExpandInput,
): PlacedStep[] {
  const base = `${procedure.id}.${step.id}`;
  const common = { procedure, section, step, dropped: isDropped(section, step, options) };
  if (step.each === 'rod') return rods.map((rod) => ({ ...common, id: `${base}@rod${rod}`, rod }));
  if (step.each === 'shell') {
    const halves: ShellHalf[] = ['U', 'L'];
    return rods.flatMap((rod) =>
      halves.map((half) => ({ ...common, id: `${base}@${rod}${half}`, rod, half })),
    );
  }
  if (step.each === 'grade') {
    return grades.map((grade) => ({
      ...common,
      id: `${base}@${grade.toLowerCase().replace(/[^a-z0-9]+/g, '-')}`,
      grade,
    }));
  }
  return [{ ...common, id: base }];
}

function isDropped(section: ProcedureSection, step: ProcedureStep, options: Record<string, string>): boolean {
  return !holds(section.when, options) || !holds(step.when, options);
}
