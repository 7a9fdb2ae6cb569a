/*
 * The plan: what a route, its procedures, an engine sheet and the vehicle's options compile into.
 * A flat list of steps with stable ids, plain JSON without numbers other than safe integers, so that
 * its hash (SHA-256 of its RFC 8785 form) is the same everywhere. Compiled by compile-plan.ts.
 */

export type CriticalClass = 'A' | 'B' | 'C';
export type SignalWord = 'DANGER' | 'WARNING' | 'CAUTION' | 'NOTICE';
export type Gate = 'close' | 'start' | 'move' | 'handover';
export type BoltSet = 'old' | 'measuring' | 'new';
export type ShellHalf = 'U' | 'L';

export interface DocumentReference {
  id: string;
  revision: number;
  hash: string;
  name: string;
}

/** A limit as the engine sheet gives it; decimal strings in `unit`. */
export interface PlanLimit {
  title: string;
  unit: string;
  low?: string;
  high?: string;
  target?: string;
  uncertainty?: string;
  taper?: string;
  spread?: string;
  /** Why there is no figure: the supervisor judges. */
  missing?: string;
}

export type PlanStage =
  | { kind: 'torque'; target: string; tolerance: string }
  | { kind: 'angle'; target: string; tolerance: string }
  | { kind: 'release' }
  | { kind: 'mark'; colour: string };

export interface PlanProgramme {
  title: string;
  thread: string;
  cycles: PlanStage[][];
}

export interface PlanCheck {
  id: string;
  ask: string;
}

export interface RodEffects {
  cap?: 'off' | 'on';
  shells?: 'out' | 'dry' | 'oiled';
  thread?: 'laid' | 'gone';
}

interface PlanStepCommon {
  /** `procedure.step`, `procedure.step@rod3`, `procedure.step@3U`, `procedure.step@stop2`. */
  id: string;
  phase: string;
  section: string;
  title: string;
  why?: string;
  how: string[];
  class: CriticalClass;
  /** Ids of the steps that must be done (or not applicable) before this one. */
  needs: string[];
  rod?: number;
  half?: ShellHalf;
  cautions: { word: SignalWord; text: string }[];
  sets?: RodEffects;
  moves?: true;
  /** Never in anybody's way: park, resume. */
  onDemand?: true;
}

export type PlanStep = PlanStepCommon &
  (
    | { kind: 'do' }
    | { kind: 'remove'; item: string; count?: number; into?: string; oneUse?: true }
    | { kind: 'refit'; item: string; part?: string; count?: number }
    | { kind: 'place'; item: string }
    | { kind: 'count'; tally: string; what: string; side: 'out' | 'in' }
    | { kind: 'inspect'; checks: PlanCheck[] }
    | { kind: 'read'; limit: string }
    | { kind: 'turn'; toAngle?: number; rods: number[]; fullTurns?: number }
    | { kind: 'gauge'; limit: string; measureAgainFrom: string; reworkFrom: string }
    | { kind: 'choose-shells' }
    | { kind: 'grade-shells' }
    | {
        kind: 'tighten';
        programme: string;
        fit: 'measuring' | 'interim' | 'final' | 'joint';
        /** For a rod cap `3A`, `3B`; for another joint its own names. */
        bolts: string[];
        /** Which set of cap bolts is on; absent for another joint. */
        set?: BoltSet;
      }
    | { kind: 'fit'; part: string; count: number; lot: boolean }
    | { kind: 'fill'; fluid: string }
    | { kind: 'photograph'; subject: string; identity?: true }
    | {
        kind: 'watch';
        /** Decimal minutes. */
        minutes: string;
        checks: { id: string; atSeconds: number; ask?: string; limit?: string; stop?: true }[];
      }
    | { kind: 'drive'; distance: string; distanceUnit: string; before: PlanCheck[]; after: PlanCheck[] }
    | {
        kind: 'hold';
        holdPoint: string;
        meaning: string;
        counts?: { what: string; expect: 'marks' };
        gate?: Gate;
        covers: string[];
        presence: 'vehicle' | 'either';
        roles: string[];
        offline: 'wait' | 'proceed';
        secondLook: boolean;
      }
    | { kind: 'witness'; holdPoint: string; meaning: string; covers: string[] }
    | { kind: 'make-safe'; checks: PlanCheck[] }
    | { kind: 'resume'; checks: PlanCheck[] }
    | { kind: 'hand-over'; checks: PlanCheck[] }
  );

export type StepKind = PlanStep['kind'];
export type StepOf<K extends StepKind> = Extract<PlanStep, { kind: K }>;

/** Something that is open between two steps: taken off and not refitted, put in and not taken out. */
export interface PlanItem {
  id: string;
  name: string;
  how: 'removed' | 'placed' | 'counted';
  opens: string;
  closes: string;
  bars: Gate[];
}

export interface PlanEngine extends DocumentReference {
  code: string;
  layout: 'inline' | 'vee';
  firingOrder: number[];
  rotation: string;
  crankpins: { pin: number; angle: number; rods: { rod: number; bankAxis: number }[] }[];
  capBolts: { bolt: string; sits: string }[];
  markColour: string;
  boltSets: { set: BoltSet; tightenings: number }[];
  measuringBolts: BoltSet;
  shells: { standard: string; grades: { grade: string; wall: string }[] };
  /** mm; for estimates of the oil film alone. */
  bearing?: { diameter: string; width: string };
  card: {
    thread: string;
    threadDiameter: string;
    range: { low: string; high: string };
    bands: { width: string; clearance: string }[];
  };
}

export interface Plan {
  v: 1;
  route: DocumentReference;
  engine: PlanEngine;
  procedures: DocumentReference[];
  options: Record<string, string>;
  /** The options in words, for people: question and the answer chosen. */
  optionWords: { ask: string; answer: string }[];
  /** The crank's stops in the order of the rod loops. */
  stops: { angle: number; rods: number[] }[];
  limits: Record<string, PlanLimit>;
  programmes: Record<string, PlanProgramme>;
  fluids: Record<string, { title: string; specification: string; quantity: string; unit: string }>;
  phases: { id: string; name: string; intro?: string; steps: string[] }[];
  steps: PlanStep[];
  items: PlanItem[];
}

/** All rods of the engine, in order of number. */
export function rodsOf(plan: Plan): number[] {
  return plan.engine.crankpins.flatMap((pin) => pin.rods.map(({ rod }) => rod)).sort((a, b) => a - b);
}

/** The names of the bolts of one rod's cap, such as `3A` and `3B`. */
export function capBoltsOf(plan: Plan, rod: number): string[] {
  return plan.engine.capBolts.map(({ bolt }) => `${rod}${bolt}`);
}

const indexes = new WeakMap<Plan, Map<string, PlanStep>>();

/** The step with this id, or undefined if the plan has none. */
export function findStep(plan: Plan, stepId: string): PlanStep | undefined {
  let index = indexes.get(plan);
  if (!index) {
    index = new Map(plan.steps.map((step) => [step.id, step]));
    indexes.set(plan, index);
  }
  return index.get(stepId);
}
