/*
 * The choice of shells on a job: which rods it is made for, what lies on the shelf, and what is proposed for the
 * rod in hand. Chosen for all rods together that are measured and have no final fit yet, because they share the
 * shelf. What a rod has in it stays its own.
 */
import { addExact, exactOf, exactToNumber, subtractExact, type Exact } from './decimal';
import { clearanceLimit } from './engine-view';
import { clearanceText, middleOf } from './job-prediction';
import type { JobState, Kept, RodState } from './job-state';
import type { EntryData } from './entry';
import { rodsOf, type PlanLimit, type PlanStep } from './plan';
import {
  chooseShells,
  explainChoice,
  type ShellChoiceInput,
  type ShellsForRod,
  type ShellsInStock,
} from './shell-choice';

type Grades = Record<'upper' | 'lower', string>;

/** What is known of a rod's clearance with the shells that are in it now. */
export interface RodClearance extends Grades {
  rod: number;
  clearance: Exact;
  uncertainty: number;
}

/** What is proposed for the rod in hand, with the reasons. */
export interface ShellProposal {
  /** Undefined where the limits and the shelf leave nothing for this rod. */
  shells: ShellsForRod | undefined;
  why: string[];
}

/** The clearance to reckon with for a rod (mm): as read, or as read with other shells and carried over to these. */
export function clearanceOfRod(state: JobState, number: number): RodClearance | undefined {
  const rod = state.rods[number];
  if (!rod?.upper || !rod.lower) return undefined;
  const now = { upper: rod.upper.grade, lower: rod.lower.grade };
  const present = [rod.front, rod.rear].filter((reading) => reading !== undefined);
  const readings = present.length > 0 ? present : lastVoidReadings(rod);
  const measured = middleOf(readings);
  const last = readings.at(-1);
  if (measured === undefined || last === undefined) return undefined;
  const then = present.length > 0 ? now : (shellsWhenRead(state, number, last.at) ?? now);
  const clearance = subtractExact(measured, subtractExact(wallsOf(state, now), wallsOf(state, then)));
  const uncertainty = Math.max(...readings.map((reading) => Math.abs(Number(reading.uncertainty))));
  return { rod: number, ...now, clearance, uncertainty };
}

/** The last reading of each end among those that no longer count. */
function lastVoidReadings({ voidReadings }: RodState): RodState['voidReadings'] {
  return (['front', 'rear'] as const).flatMap((end) => voidReadings.findLast((one) => one.end === end) ?? []);
}

/** The grades that were in a rod when it was read. */
function shellsWhenRead(state: JobState, rod: number, at: string): Grades | undefined {
  const kept = choicesMade(state).findLast((choice) => choice.rod === rod && choice.at <= at);
  return kept && { upper: kept.data.upper.grade, lower: kept.data.lower.grade };
}

/** What this rod's clearance would be with other grades in it, as a decimal text. */
export function expectedClearance(
  state: JobState,
  { upper, lower, clearance }: RodClearance,
  grades: Grades,
): string {
  const change = subtractExact(wallsOf(state, grades), wallsOf(state, { upper, lower }));
  return clearanceText(subtractExact(clearance, change));
}

function wallsOf(state: JobState, { upper, lower }: Grades): Exact {
  const { grades } = state.plan.engine.shells;
  const wall = (grade: string): Exact => exactOf(grades.find((one) => one.grade === grade)?.wall ?? '0');
  return addExact(wall(upper), wall(lower));
}

interface ChoiceMade {
  rod: number;
  at: string;
  data: EntryData<'chose-shells'>;
}

/** Every choice that was made on the job and not taken back, in order of time; also those that no longer count. */
function choicesMade(state: JobState): ChoiceMade[] {
  const made = state.plan.steps.flatMap((step) =>
    step.kind === 'choose-shells' && step.rod !== undefined ? choicesOn(state, step, step.rod) : [],
  );
  return made.toSorted((a, b) => a.at.localeCompare(b.at));
}

function choicesOn(state: JobState, step: PlanStep, rod: number): ChoiceMade[] {
  const isChoice = (kept: Kept): kept is Kept & { data: EntryData<'chose-shells'> } =>
    kept.kind === 'chose-shells' && kept.takenBack === undefined;
  const entries = state.steps[step.id]?.entries ?? [];
  return entries.filter(isChoice).map(({ at, data }) => ({ rod, at, data }));
}

/**
 * What lies on the shelf by the last count, less what was taken since and with what came back; undefined before
 * the first count. A shell that was only measured with goes back to the shelf.
 */
export function shellsOnShelf(state: JobState): ShellsInStock[] | undefined {
  const inRods = new Map<number, Grades>();
  let shelf: ShellsInStock[] | undefined;
  for (const { rod, data } of choicesMade(state)) {
    const counted = data.stock ?? shelf;
    const before = inRods.get(rod);
    const after = { upper: data.upper.grade, lower: data.lower.grade };
    inRods.set(rod, after);
    shelf = counted && afterChange(counted, before, after);
  }
  return shelf;
}

function afterChange(counted: ShellsInStock[], before: Grades | undefined, after: Grades): ShellsInStock[] {
  const shelf = counted.map((held) => ({ ...held }));
  for (const half of ['upper', 'lower'] as const) {
    if (before?.[half] === after[half]) continue;
    const places = (grade: string): ShellsInStock[] =>
      shelf.filter((held) => held.grade === grade && (held.half === half || held.half === 'either'));
    const taken = places(after[half]).find(({ count }) => count > 0);
    if (taken) taken.count -= 1;
    const [back] = before === undefined ? [] : places(before[half]);
    if (back) back.count += 1;
  }
  return shelf;
}

/** The shelf where nobody has counted: enough of every grade. */
export function fullShelf(state: JobState): ShellsInStock[] {
  const count = 2 * rodsOf(state.plan).length;
  return state.plan.engine.shells.grades.map(({ grade }) => ({ grade, half: 'either', count }));
}

/** Which grades are proposed for the rod in hand; undefined before it was measured or where no limit is known. */
export function proposeShells(
  state: JobState,
  rod: number,
  stock: ShellsInStock[],
): ShellProposal | undefined {
  const measured = rodsToChooseFor(state);
  const limit = clearanceLimit(state);
  const inHand = measured.find((one) => one.rod === rod);
  if (!inHand || limit?.low === undefined || limit.high === undefined) return undefined;
  const { low, high } = limit;
  const asked = (rods: RodClearance[]): ShellChoiceInput =>
    inputFor(state, rods, stock, { ...limit, low, high });
  const together = proposalFrom(asked(measured), rod);
  if (together.shells || measured.length === 1) return together;
  const alone = proposalFrom(asked([inHand]), rod);
  return { ...alone, why: [...alone.why, `Not for all measured rods together. ${together.why.join(' ')}`] };
}

function proposalFrom(input: ShellChoiceInput, rod: number): ShellProposal {
  const { rods, why } = chooseShells(input);
  const shells = rods.find((one) => one.rod === rod);
  if (shells === undefined) return { shells, why: [why] };
  // Both halves may have the same to say.
  const against = explainChoice(input, rod).map((one) => `${sentence(one.why)}.`);
  return { shells, why: [why, ...new Set(against)] };
}

function sentence(words: string): string {
  return words.charAt(0).toUpperCase() + words.slice(1);
}

/** Measured, and not fitted for good. */
function rodsToChooseFor(state: JobState): RodClearance[] {
  return rodsOf(state.plan).flatMap((rod) => {
    const known = isFitted(state, rod) ? undefined : clearanceOfRod(state, rod);
    return known && known.clearance.units > 0n ? [known] : [];
  });
}

function isFitted(state: JobState, rod: number): boolean {
  return state.plan.steps.some(
    (step) =>
      step.kind === 'tighten' &&
      step.fit === 'final' &&
      step.rod === rod &&
      state.steps[step.id]?.status !== 'open',
  );
}

function inputFor(
  state: JobState,
  rods: RodClearance[],
  stock: ShellsInStock[],
  limit: PlanLimit & { low: string; high: string },
): ShellChoiceInput {
  const [low, high] = [Number(limit.low), Number(limit.high)];
  return {
    rods: rods.map(({ rod, upper, lower, clearance }) => ({
      ...{ rod, upper, lower },
      clearance: exactToNumber(clearance),
    })),
    grades: state.plan.engine.shells.grades.map(({ grade, wall }) => ({ grade, wall: Number(wall) })),
    stock,
    // A sheet without a target means the middle.
    target: limit.target === undefined ? (low + high) / 2 : Number(limit.target),
    ...{ low, high },
    uncertainty: Math.max(...rods.map(({ uncertainty }) => uncertainty)),
  };
}
