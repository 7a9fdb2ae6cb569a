import type { CapRowBolt } from '@/components/CapRow';
import type { EngineBelowProps, EngineRod } from '@/components/EngineBelow';
import { nextTightening } from '@/domain/job';
import type { JobState, RodState } from '@/domain/job-state';
import { capBoltsOf, type PlanLimit, type PlanStep, type StepOf } from '@/domain/plan';
import { clockTime } from './time-words';

/** The engine as the drawing at the side shows it, with the rod of the step in hand. */
export function engineView(state: JobState, step: PlanStep | undefined, zone: string): EngineBelowProps {
  const inHand = step?.kind === 'tighten' ? boltInHand(state, step) : undefined;
  return {
    pins: state.plan.engine.crankpins.map(({ pin, rods }) => ({
      pin: String(pin),
      rods: rods.map(({ rod }) => rodView(state, rod, step, zone)),
    })),
    crankAngle: state.crankAngle,
    ...(inHand === undefined ? {} : { inHand }),
  };
}

function boltInHand(state: JobState, step: StepOf<'tighten'>): string | undefined {
  return nextTightening(state, step)?.bolt;
}

function rodView(state: JobState, rod: number, step: PlanStep | undefined, zone: string): EngineRod {
  const running = tighteningOn(state, rod, step);
  const isInHand = step?.rod === rod;
  return {
    rod: String(rod),
    bolts: boltsLeftToRight(state, rod).map((bolt) => boltView(state, bolt, running, isInHand)),
    ...figureOf(state.rods[rod], state),
    ...rodWords(state, rod, running, zone),
    isInHand,
  };
}

/** The bolts of a cap as they sit, seen from below. */
export function boltsLeftToRight(state: JobState, rod: number): string[] {
  const names = capBoltsOf(state.plan, rod);
  const { capBolts } = state.plan.engine;
  const side = (index: number) => (capBolts[index]?.sits.includes('right') === true ? 1 : 0);
  return names
    .map((name, index) => ({ name, side: side(index) }))
    .sort((a, b) => a.side - b.side)
    .map(({ name }) => name);
}

/** The tightening that the drawing of a rod shows: the step in hand, else its final fit. */
function tighteningOn(
  state: JobState,
  rod: number,
  step: PlanStep | undefined,
): StepOf<'tighten'> | undefined {
  if (step?.kind === 'tighten' && step.rod === rod) return step;
  return state.plan.steps.find(
    (s): s is StepOf<'tighten'> => s.kind === 'tighten' && s.fit === 'final' && s.rod === rod,
  );
}

function boltView(
  state: JobState,
  name: string,
  running: StepOf<'tighten'> | undefined,
  isInHand: boolean,
): CapRowBolt {
  const bolt = state.bolts[name];
  const cycles = running === undefined ? 0 : (state.plan.programmes[running.programme]?.cycles.length ?? 0);
  const isBegun = running !== undefined && state.steps[running.id]?.status !== 'open';
  return {
    name,
    state: boltState(bolt, isInHand && isBegun),
    cycles,
    cyclesDone: isBegun ? Math.min(bolt?.cyclesDone ?? 0, cycles) : 0,
  };
}

function boltState(bolt: JobState['bolts'][string] | undefined, isRunning: boolean): CapRowBolt['state'] {
  if (bolt?.condemned !== undefined) return 'condemned';
  if (bolt?.marked) return 'marked';
  return isRunning ? 'running' : 'waiting';
}

/** The clearance farther from the target: the one that decides. */
function figureOf(rod: RodState | undefined, state: JobState): { figure?: string } {
  const readings = [rod?.front, rod?.rear].flatMap((reading) => (reading ? [reading.clearance] : []));
  const target = Number(clearanceLimit(state)?.target ?? readings[0] ?? 0);
  const [first] = readings.sort((a, b) => Math.abs(Number(b) - target) - Math.abs(Number(a) - target));
  return first === undefined ? {} : { figure: first };
}

/** The limit that the clearance of this engine's rods is judged by. */
export function clearanceLimit(state: JobState): PlanLimit | undefined {
  const gauge = state.plan.steps.find((step): step is StepOf<'gauge'> => step.kind === 'gauge');
  return gauge && state.plan.limits[gauge.limit];
}

function rodWords(
  state: JobState,
  rod: number,
  running: StepOf<'tighten'> | undefined,
  zone: string,
): { words: string; note?: string } {
  const bolts = capBoltsOf(state.plan, rod).flatMap((name) => state.bolts[name] ?? []);
  const marks = bolts.flatMap(({ marked }) => (marked ? [marked.at] : []));
  if (bolts.some(({ condemned }) => condemned !== undefined))
    return { words: 'condemned', note: 'to be replaced' };
  if (marks.length === bolts.length && marks.length > 0) {
    return { words: 'marked', note: clockTime(marks.at(-1) ?? '', zone) };
  }
  const status = running === undefined ? undefined : state.steps[running.id]?.status;
  if (running && status === 'begun') return cycleWords(state, running);
  return restingWords(state.rods[rod]);
}

function cycleWords(state: JobState, step: StepOf<'tighten'>): { words: string; note?: string } {
  const next = nextTightening(state, step);
  const cycles = state.plan.programmes[step.programme]?.cycles.length ?? 0;
  if (next?.kind !== 'stage') return { words: 'let off', note: 'starts again' };
  return cycles > 1 ? { words: `cycle ${next.cycle + 1}`, note: `of ${cycles}` } : { words: 'tightening' };
}

function restingWords(rod: RodState | undefined): { words: string; note?: string } {
  if (!rod) return { words: 'waiting' };
  if (rod.thread === 'laid') return { words: 'thread laid' };
  if (rod.cap === 'off') return { words: 'cap off', ...(rod.shells === 'out' ? { note: 'shells out' } : {}) };
  if (rod.shells === 'dry') return { words: 'shells dry' };
  const isMeasured = rod.front !== undefined && rod.rear !== undefined;
  if (isMeasured) return { words: 'measured', ...(rod.shells === 'oiled' ? { note: 'oiled' } : {}) };
  return rod.shells === 'old' ? { words: 'waiting', note: 'old shells' } : { words: 'waiting' };
}
