/*
 * Tightening steps between the record and the programme: entries become tightening.ts's records, and what
 * they amount to for each bolt. A void measurement still happened: its tightenings stay on the bolt.
 */
import type { EntryData } from './entry';
import { remark } from './job-deviation';
import type { BoltState, JobState, Kept, StepState } from './job-state';
import type { BoltSet, Plan, PlanStage, StepOf } from './plan';
import {
  nextAction,
  recordStage,
  tighteningsUsed,
  type Programme,
  type Stage,
  type TighteningAction,
  type TighteningRecord,
} from './tightening';

type TightenStep = StepOf<'tighten'>;

const programmes = new WeakMap<object, Programme>();

/** The programme of a step in numbers: torque in N·m, angles in degrees. */
export function programmeOf(state: JobState, step: TightenStep): Programme | undefined {
  const planned = state.plan.programmes[step.programme];
  if (!planned) return undefined;
  let programme = programmes.get(planned);
  if (!programme) {
    programme = { cycles: planned.cycles.map((stages) => stages.map(stageInNumbers)) };
    programmes.set(planned, programme);
  }
  return programme;
}

function stageInNumbers(stage: PlanStage): Stage {
  return stage.kind === 'torque' || stage.kind === 'angle'
    ? { kind: stage.kind, target: Number(stage.target), tolerance: Number(stage.tolerance) }
    : stage;
}

/** The records of a step that still count towards its programme. */
export function tighteningRecords(state: JobState, step: TightenStep): TighteningRecord[] {
  return recordsOf(state, step).counted;
}

/** Everything that was really done to the bolts, also where the measurement it served is void. */
function physicalRecords(state: JobState, step: TightenStep): TighteningRecord[] {
  return recordsOf(state, step).physical;
}

interface StepRecords {
  programme: Programme;
  counted: TighteningRecord[];
  physical: TighteningRecord[];
}

const NO_RECORDS = { counted: [], physical: [] };

/** A state is never changed in place, so what a step's entries amount to is worked out once. */
const workedOut = new WeakMap<StepState, StepRecords>();

function recordsOf(state: JobState, step: TightenStep): Pick<StepRecords, 'counted' | 'physical'> {
  const programme = programmeOf(state, step);
  const own = state.steps[step.id];
  if (!programme || !own) return NO_RECORDS;
  const held = workedOut.get(own);
  if (held?.programme === programme) return held;
  const done = own.entries.filter((kept) => kept.takenBack !== 'touched by mistake, not done');
  const physical = done.flatMap((kept) => toRecords(programme, kept));
  const isAll = done.every((kept) => kept.voided === undefined);
  const counted = isAll
    ? physical
    : done.flatMap((kept) => (kept.voided === undefined ? toRecords(programme, kept) : []));
  const records = { programme, counted, physical };
  workedOut.set(own, records);
  return records;
}

function toRecords(programme: Programme, kept: Kept): TighteningRecord[] {
  // Each kind's data was read by its own schema before the entry came here.
  switch (kept.kind) {
    case 'tightened': {
      const data = kept.data as EntryData<'tightened'>;
      if (!programme.cycles[data.cycle]?.[data.stage]) return [];
      // Done, but wrong: what was turned can't be trusted, so the bolt counts as gone over.
      const outcome = kept.takenBack === 'done, but wrong' ? 'over' : data.outcome;
      // Less than nothing can't have been read; what was recorded so all the same counts as confirmed.
      const isRead = data.value !== undefined && Number(data.value) >= 0;
      const reading = isRead ? Number(data.value) : undefined;
      return [recordStage(programme, data, { outcome, ...(reading === undefined ? {} : { reading }) })];
    }
    case 'released': {
      const data = kept.data as EntryData<'released'>;
      // Done, but wrong: nobody knows what the bolt holds now, so the cap starts again.
      if (kept.takenBack === 'done, but wrong') return [{ kind: 'released', bolt: data.bolt, unsure: true }];
      if (data.because !== undefined) return [{ kind: 'released', bolt: data.bolt, unsure: false }];
      return programme.cycles[data.cycle]?.[data.stage]
        ? [recordStage(programme, data, { outcome: 'done' })]
        : [];
    }
    case 'marked': {
      const data = kept.data as EntryData<'marked'>;
      // A mark that was wrong is wiped off and drawn anew; so is a wrong bolt taken out for another.
      if (kept.takenBack !== undefined) return [];
      return programme.cycles[data.cycle]?.[data.stage]
        ? [recordStage(programme, data, { outcome: 'done' })]
        : [];
    }
    case 'started-again': {
      const data = kept.data as EntryData<'started-again'>;
      return data.bolts.map((bolt) => ({ kind: 'released', bolt, unsure: true }));
    }
    case 'bolt-replaced':
      return kept.takenBack !== undefined
        ? []
        : [{ kind: 'replaced', bolt: (kept.data as EntryData<'bolt-replaced'>).bolt }];
    default:
      return [];
  }
}

const nextActions = new WeakMap<TighteningRecord[], { step: TightenStep; action: TighteningAction | null }>();

/** What is to be done next on the bolts of the step, or null when its programme is finished. */
export function nextTightening(state: JobState, step: TightenStep): TighteningAction | null {
  const programme = programmeOf(state, step);
  if (!programme) return null;
  const records = tighteningRecords(state, step);
  const held = nextActions.get(records);
  if (held?.step === step) return held.action;
  const action = nextAction(programme, step.bolts, records);
  if (records !== NO_RECORDS.counted) nextActions.set(records, { step, action });
  return action;
}

/** Is every stage of the programme done on every bolt? */
export function isProgrammeDone(state: JobState, step: TightenStep): boolean {
  return tighteningRecords(state, step).length > 0 && nextTightening(state, step) === null;
}

/** Is the next act the first of the programme, so that it has to last from here? */
export function startsAgain(state: JobState, step: TightenStep): boolean {
  const next = nextTightening(state, step);
  if (next?.kind !== 'stage') return false;
  return next.cycle === 0 && next.stage === 0 && next.bolt === step.bolts[0];
}

/** How many tightenings a cap bolt has left by the engine sheet; bolts of other joints are not counted. */
export function tighteningsLeft(state: JobState, step: TightenStep, bolt: string): number {
  const limit = state.plan.engine.boltSets.find(({ set }) => set === step.set)?.tightenings;
  if (step.set === undefined || limit === undefined) return Number.POSITIVE_INFINITY;
  return limit - (state.bolts[bolt]?.used[step.set] ?? 0);
}

const tightenStepsOf = new WeakMap<Plan, TightenStep[]>();

/** The tightening steps of a plan, in its order. */
function tightenSteps(plan: Plan): TightenStep[] {
  let steps = tightenStepsOf.get(plan);
  if (!steps) {
    steps = plan.steps.filter((step): step is TightenStep => step.kind === 'tighten');
    tightenStepsOf.set(plan, steps);
  }
  return steps;
}

/** What the step's records, and those of the other fits with the same set, make of each cap bolt. */
export function settleBolts(state: JobState, step: TightenStep): JobState {
  const { set } = step;
  if (set === undefined) return state;
  const bolts = { ...state.bolts };
  for (const bolt of step.bolts) {
    const present = bolts[bolt];
    if (present) bolts[bolt] = settleBolt(state, step, set, present);
  }
  return { ...state, bolts };
}

function settleBolt(state: JobState, step: TightenStep, set: BoltSet, present: BoltState): BoltState {
  const { bolt } = present;
  const fits = tightenSteps(state.plan).filter((other) => other.set === set && other.bolts.includes(bolt));
  const all = fits.flatMap((fit) => physicalRecords(state, fit));
  const own = tighteningRecords(state, step);
  const next = nextTightening(state, step);
  // From the moment that it went over, also while the bolt beside it still waits to be let off.
  const fate = own.findLast(
    (record) => record.bolt === bolt && (record.kind === 'replaced' || isOver(record)),
  );
  const isCondemned = fate !== undefined && isOver(fate);
  const isReleased = next?.kind === 'release' || next?.kind === 'replace';
  return {
    ...present,
    set,
    used: { ...present.used, [set]: tighteningsUsed(all, bolt) },
    replaced: all.filter((record) => record.kind === 'replaced' && record.bolt === bolt).length,
    condemned: isCondemned ? 'turned too far: to be replaced' : undefined,
    lot: lotOf(state, step, bolt) ?? present.lot,
    cyclesDone: isReleased || own.length === 0 ? 0 : cyclesDone(state, step, bolt, next),
    marked: step.fit !== 'final' ? present.marked : isReleased ? undefined : markOf(state, step, bolt),
  };
}

function isOver(record: TighteningRecord): boolean {
  return record.kind === 'stage' && record.outcome === 'over';
}

function lotOf(state: JobState, step: TightenStep, bolt: string): string | undefined {
  const replaced = state.steps[step.id]?.entries.findLast(
    (kept) => kept.kind === 'bolt-replaced' && (kept.data as EntryData<'bolt-replaced'>).bolt === bolt,
  );
  return replaced && (replaced.data as EntryData<'bolt-replaced'>).lot;
}

/** Whole cycles that this bolt has behind it since the cap last started. */
function cyclesDone(state: JobState, step: TightenStep, bolt: string, next: TighteningAction | null): number {
  const programme = programmeOf(state, step);
  if (!programme) return 0;
  if (next === null) return programme.cycles.length;
  if (next.kind !== 'stage') return 0;
  const stages = programme.cycles[next.cycle] ?? [];
  const lastPass = stages.findLastIndex((stage) => stage.kind === 'torque' || stage.kind === 'angle');
  const order = step.bolts.indexOf(bolt) < step.bolts.indexOf(next.bolt);
  const isPastLastPass = next.stage > lastPass || (next.stage === lastPass && order);
  const isMarking =
    next.stage > lastPass && next.bolt !== bolt && !order && next.cycle === programme.cycles.length - 1;
  return next.cycle + (isPastLastPass && !isMarking ? 1 : 0);
}

/** The final mark of the bolt, void as soon as its cap starts again. */
function markOf(state: JobState, step: TightenStep, bolt: string): BoltState['marked'] {
  const programme = programmeOf(state, step);
  if (!programme) return undefined;
  const lastCycle = programme.cycles.length - 1;
  const entries = (state.steps[step.id]?.entries ?? []).filter(
    (kept) => kept.voided === undefined && kept.takenBack !== 'touched by mistake, not done',
  );
  const restart = entries.findLastIndex(
    (kept) =>
      kept.kind === 'started-again' ||
      kept.kind === 'bolt-replaced' ||
      (kept.takenBack === 'done, but wrong' && kept.kind !== 'marked') ||
      (kept.kind === 'tightened' && (kept.data as EntryData<'tightened'>).outcome === 'over') ||
      (kept.kind === 'released' && (kept.data as EntryData<'released'>).because !== undefined),
  );
  const mark = entries.slice(restart + 1).findLast((kept) => {
    if (kept.kind !== 'marked' || kept.takenBack !== undefined) return false;
    const data = kept.data as EntryData<'marked'>;
    const lastPass = (programme.cycles[lastCycle] ?? []).findLastIndex(
      (s) => s.kind === 'torque' || s.kind === 'angle',
    );
    return data.bolt === bolt && data.cycle === lastCycle && data.stage > lastPass;
  });
  return mark && { colour: (mark.data as EntryData<'marked'>).colour, at: mark.at };
}

const PACE_ACTS = 24;
const PACE_SECONDS = 60;

/** An impossible pace is asked about: so many tightening touches in a minute were hardly all turned. */
export function checkPace(state: JobState, kept: Kept): JobState {
  if (kept.kind !== 'tightened' || kept.step === undefined) return state;
  const since = Date.parse(kept.at) - PACE_SECONDS * 1000;
  const instants = new Set<string>();
  for (const step of recentTightenSteps(state, kept)) {
    const entries = state.steps[step]?.entries ?? [];
    // A tablet's own acts come in order, so the first that is too old ends the search.
    for (let i = entries.length - 1; i >= 0; i -= 1) {
      const entry = entries[i];
      if (entry?.kind !== 'tightened' || entry.device !== kept.device) continue;
      if (Date.parse(entry.at) <= since) break;
      instants.add(entry.at);
    }
  }
  const asked = state.remarks.findLast((one) => one.code === 'pace');
  if (instants.size < PACE_ACTS || (asked && Date.parse(asked.at) > since)) return state;
  return remark(
    state,
    kept,
    'pace',
    `${instants.size} tightening touches within ${PACE_SECONDS} seconds: were all of them turned?`,
  );
}

/** This step and the tightening steps just before it in the plan; a minute never reaches further back. */
function recentTightenSteps(state: JobState, kept: Kept): string[] {
  const all = tightenSteps(state.plan).map(({ id }) => id);
  const here = all.indexOf(kept.step ?? '');
  return all.slice(Math.max(0, here - 3), here + 1);
}

type TighteningKind = 'tightened' | 'released' | 'marked' | 'bolt-replaced';

/** Kind and data of the entry that an action is recorded by, confirmed and done. */
export type TighteningDraft = { [K in TighteningKind]: { kind: K; data: EntryData<K> } }[TighteningKind];

/** The entry that one tightening action is recorded by; a screen adds reading, outcome, tool and lot. */
export function entryForAction(
  state: JobState,
  step: TightenStep,
  action: TighteningAction,
): TighteningDraft | undefined {
  if (action.kind === 'replace')
    return { kind: 'bolt-replaced', data: { bolt: action.bolt, reason: 'turned too far' } };
  if (action.kind === 'release') {
    return {
      kind: 'released',
      data: { bolt: action.bolt, cycle: 0, stage: 0, because: releaseWords[action.because] },
    };
  }
  const { bolt, cycle, stage } = action;
  const planned = state.plan.programmes[step.programme]?.cycles[cycle]?.[stage];
  switch (planned?.kind) {
    case 'torque':
      return {
        kind: 'tightened',
        data: { bolt, cycle, stage, target: { ...planned, unit: 'N·m' }, how: 'confirmed', outcome: 'done' },
      };
    case 'angle':
      return {
        kind: 'tightened',
        data: { bolt, cycle, stage, target: { ...planned, unit: 'deg' }, how: 'confirmed', outcome: 'done' },
      };
    case 'release':
      return { kind: 'released', data: { bolt, cycle, stage } };
    case 'mark':
      return { kind: 'marked', data: { bolt, cycle, stage, colour: planned.colour } };
    default:
      return undefined;
  }
}

const releaseWords = {
  over: 'the bolt beside it was turned too far',
  replaced: 'the bolt beside it was replaced',
  released: 'the bolt beside it was let off',
} as const;
