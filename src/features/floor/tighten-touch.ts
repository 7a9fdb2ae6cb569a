/*
 * What one touch on a tightening step stands for. Releases of a cap are one touch together, and so are the lower
 * torque passes of its bolts up to the pass that counts; an angle, a mark, and the last pass of a joint that stays
 * never are, but that the paint on such a joint goes with its last pull. A measuring or interim fit comes off
 * again, so all its torques are lower ones. The mark of a rod cap is always a touch of its own.
 */
import { nextTightening, tighteningRecords } from '@/domain/job';
import { entryForAction, programmeOf, tighteningsLeft } from '@/domain/job-tightening';
import { whyNotStart } from '@/domain/job-tightening-rules';
import type { JobState, ToolInHand } from '@/domain/job-state';
import type { StepOf } from '@/domain/plan';
import {
  nextAction,
  recordStage,
  type Programme,
  type StageAction,
  type TighteningAction,
  type TighteningRecord,
} from '@/domain/tightening';
import type { Draft } from '@/offline/record';
import { amountWords, boltName } from './done-words';

type TightenStep = StepOf<'tighten'>;

export interface TightenTouch {
  /** The actions that the touch records, in order; at least one. */
  actions: [TighteningAction, ...TighteningAction[]];
  /** Tells this action from every other of the job. */
  key: string;
}

/**
 * The next touch of the step, or null when its programme is finished. The touch ends before an action whose tool
 * is not known yet, so that each wrench is asked for by itself.
 */
export function nextTouch(
  state: JobState,
  step: TightenStep,
  hasTool: (action: TighteningAction) => boolean = () => true,
): TightenTouch | null {
  const first = nextTightening(state, step);
  const programme = programmeOf(state, step);
  if (!first || !programme) return null;
  const actions: TightenTouch['actions'] = [first];
  const key = `${step.id} ${actionKey(first)} ${tighteningRecords(state, step).length}`;
  if (!isShared(programme, step, first)) return withOwnMark(programme, step, { actions, key }, state);
  const records = [...tighteningRecords(state, step)];
  for (;;) {
    records.push(recordOf(programme, actions.at(-1) ?? first));
    const next = nextAction(programme, step.bolts, records);
    if (!next || !isSameRun(programme, step, first, next)) return { actions, key };
    if (!isSameRound(first, next) && !hasTool(next)) return { actions, key };
    actions.push(next);
  }
}

function withOwnMark(
  programme: Programme,
  step: TightenStep,
  touch: TightenTouch,
  state: JobState,
): TightenTouch {
  const [action] = touch.actions;
  if (step.fit !== 'joint' || isMark(action)) return touch;
  const records = [...tighteningRecords(state, step), recordOf(programme, action)];
  const next = nextAction(programme, step.bolts, records);
  return next && isMark(next) && next.bolt === action.bolt ? { ...touch, actions: [action, next] } : touch;
}

/** Whether an action paints a mark. */
export function isMark(action: TighteningAction): boolean {
  return action.kind === 'stage' && action.spec.kind === 'mark';
}

/** The touch without the marks that go with it: what "yes, it was turned" says. */
export function pullsOf(touch: TightenTouch): TightenTouch {
  const [first, ...others] = touch.actions;
  return { ...touch, actions: [first, ...others.filter((action) => !isMark(action))] };
}

/** What comes after a touch if it goes well; null when the programme is then finished. */
export function afterTouch(state: JobState, step: TightenStep, touch: TightenTouch): TighteningAction | null {
  const programme = programmeOf(state, step);
  if (!programme) return null;
  const records = [
    ...tighteningRecords(state, step),
    ...touch.actions.map((action) => recordOf(programme, action)),
  ];
  return nextAction(programme, step.bolts, records);
}

/** The entries of a touch that says "done"; a class A pass names its tool. */
export function touchDrafts(
  state: JobState,
  step: TightenStep,
  touch: TightenTouch,
  toolFor: (action: TighteningAction) => ToolInHand | undefined,
): Draft[] {
  return touch.actions.flatMap((action): Draft[] => {
    const entry = entryForAction(state, step, action);
    if (!entry) return [];
    if (entry.kind !== 'tightened') return [{ ...entry, step: step.id }];
    const tool = toolFor(action);
    return [
      {
        kind: 'tightened',
        step: step.id,
        data: { ...entry.data, ...(tool ? { tool: toolUsed(tool) } : {}) },
      },
    ];
  });
}

/** A tool as an entry carries it. */
export function toolUsed({ id, name, serial, dueOn }: ToolInHand): Omit<ToolInHand, 'at'> {
  return { id, name, serial, dueOn };
}

/** Is a bolt on its way through a cycle, so that nobody else takes over now? */
export function isMidCycle(state: JobState, step: TightenStep): boolean {
  const next = nextTightening(state, step);
  if (next?.kind !== 'stage' || tighteningRecords(state, step).length === 0) return false;
  return next.stage > 0 || next.bolt !== step.bolts[0];
}

/** A bolt that can't last through the programme and is replaced before the cap starts. */
export function wornBolt(state: JobState, step: TightenStep): string | undefined {
  if (whyNotStart(state, step).ok) return undefined;
  const cycles = state.plan.programmes[step.programme]?.cycles.length ?? 0;
  return step.bolts.find((bolt) => tighteningsLeft(state, step, bolt) < cycles);
}

/** The stage's own figure with its unit, as "25 N·m" or "110°"; nothing for a release or a mark. */
export function stageAmount(state: JobState, step: TightenStep, action: StageAction): string | undefined {
  const stage = state.plan.programmes[step.programme]?.cycles[action.cycle]?.[action.stage];
  if (stage?.kind === 'torque') return amountWords(stage.target, 'N·m');
  return stage?.kind === 'angle' ? amountWords(stage.target, 'deg') : undefined;
}

/** An action in words that follow "then". */
export function actionWords(state: JobState, step: TightenStep, action: TighteningAction): string {
  const name = boltName(action.bolt);
  if (action.kind === 'release') return `release ${name}`;
  if (action.kind === 'replace') return `replace ${name}`;
  const amount = stageAmount(state, step, action);
  switch (action.spec.kind) {
    case 'torque':
      return `${name} to ${amount ?? ''}`;
    case 'angle':
      return `turn ${name} through ${amount ?? ''}`;
    case 'release':
      return `release ${name}, a quarter turn at a time`;
    case 'mark':
      return `paint the mark on ${name}`;
  }
}

/** The figures of a touch's passes in order, as "8" and "25", each once. */
export function touchAmounts(state: JobState, step: TightenStep, { actions }: TightenTouch): string[] {
  return [
    ...new Set(
      actions.flatMap((action) => (action.kind === 'stage' ? (stageAmount(state, step, action) ?? []) : [])),
    ),
  ];
}

/** The bolts of a touch, each once. */
export function touchBolts({ actions }: TightenTouch): string[] {
  return [...new Set(actions.map(({ bolt }) => bolt))];
}

/** Where in the programme, as "Cycle 2 of 3, the angle pass". */
export function placeWords(state: JobState, step: TightenStep, touch: TightenTouch): string {
  const [action] = touch.actions;
  const cycles = state.plan.programmes[step.programme]?.cycles.length ?? 1;
  if (action.kind !== 'stage') return 'The cap starts again at its first cycle';
  const amounts = touchAmounts(state, step, touch);
  const isMarkedToo = !isMark(action) && touch.actions.some(isMark);
  const pass =
    amounts.length > 1
      ? `the passes to ${amounts.map((amount) => amount.replace(/ N·m$/, '')).join(' and ')} N·m`
      : `${passWords(state, step, action)}${isMarkedToo ? ', then its mark' : ''}`;
  return cycles === 1
    ? pass.charAt(0).toUpperCase() + pass.slice(1)
    : `Cycle ${action.cycle + 1} of ${cycles}, ${pass}`;
}

function passWords(state: JobState, step: TightenStep, action: StageAction): string {
  switch (action.spec.kind) {
    case 'torque':
      return `the ${stageAmount(state, step, action) ?? ''} pass`;
    case 'angle':
      return 'the angle pass';
    case 'release':
      return 'let off before the next cycle';
    case 'mark':
      return action.cycle === (state.plan.programmes[step.programme]?.cycles.length ?? 1) - 1
        ? 'from head to cap'
        : 'the reference line';
  }
}

function actionKey(action: TighteningAction): string {
  return action.kind === 'stage'
    ? `${action.bolt}.${action.cycle}.${action.stage}`
    : `${action.kind}.${action.bolt}`;
}

function isShared(programme: Programme, step: TightenStep, first: TighteningAction): boolean {
  if (first.kind === 'release') return true;
  if (first.kind === 'replace') return false;
  return first.spec.kind === 'release' || isLowerTorque(programme, step, first);
}

function isLowerTorque(programme: Programme, { fit }: TightenStep, action: StageAction): boolean {
  if (action.spec.kind !== 'torque') return false;
  if (fit === 'measuring' || fit === 'interim') return true;
  const stages = programme.cycles[action.cycle] ?? [];
  return action.stage < stages.findLastIndex(({ kind }) => kind === 'torque' || kind === 'angle');
}

/** The same act on every bolt of the cap, and the next lower torque after a lower one. */
function isSameRun(
  programme: Programme,
  step: TightenStep,
  first: TighteningAction,
  next: TighteningAction,
): boolean {
  if (isSameRound(first, next)) return true;
  return (
    first.kind === 'stage' &&
    next.kind === 'stage' &&
    next.cycle === first.cycle &&
    isLowerTorque(programme, step, first) &&
    isLowerTorque(programme, step, next)
  );
}

function isSameRound(first: TighteningAction, next: TighteningAction): boolean {
  if (first.kind !== 'stage') return first.kind === next.kind;
  return next.kind === 'stage' && next.cycle === first.cycle && next.stage === first.stage;
}

function recordOf(programme: Programme, action: TighteningAction): TighteningRecord {
  if (action.kind === 'stage') return recordStage(programme, action, { outcome: 'done' });
  return action.kind === 'replace'
    ? { kind: 'replaced', bolt: action.bolt }
    : { kind: 'released', bolt: action.bolt, unsure: false };
}
