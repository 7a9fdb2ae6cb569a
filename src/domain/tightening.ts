import { addExact, compareExact, exactOf, subtractExact } from '@/domain/decimal';

export {
  adapterSetting,
  boltStiffness,
  estimatePreload,
  NUT_FACTORS,
  nutFactorRange,
  preloadFromTorque,
  strength,
  stressArea,
  torqueFromPreload,
  travelFromAngle,
  type NutFactorRange,
  type PreloadEstimate,
  type PropertyClass,
  type Thread,
} from './bolt';

/*
 * A programme belongs to the bolts of one cap or joint. Where a cap stands is never kept anywhere: it follows
 * from the records of its bolts, in the order they came, whatever that order was. So a reload, another tablet
 * or a late record can not lose the place.
 */

/** One thing a bolt is taken through. Torque in N·m, angle in degrees, each within this stage alone. */
export type Stage =
  | { kind: 'torque'; target: number; tolerance: number }
  | { kind: 'angle'; target: number; tolerance: number }
  | { kind: 'release' }
  | { kind: 'mark'; colour: string };

/** The cycles of a tightening; each but the last ends with a release where its sheet asks for one. */
export interface Programme {
  cycles: Stage[][];
}

/** What happened to another bolt of the cap, so that this one has to be let off. */
export type ReleaseReason = 'over' | 'replaced' | 'released';

/** A stage of the programme on one bolt; `cycle` and `stage` count from 0. */
export interface StageAction {
  kind: 'stage';
  bolt: string;
  cycle: number;
  stage: number;
  spec: Stage;
}

/** What is to be done next on the bolts of a cap. */
export type TighteningAction =
  StageAction | { kind: 'release'; bolt: string; because: ReleaseReason } | { kind: 'replace'; bolt: string };

/** How a stage ended. Short and continued means that it stopped short and then went on to the target. */
export type Outcome = 'done' | 'short and continued' | 'over';

/** A stage that was done on one bolt. Without a reading it was confirmed, not measured. */
export interface StageRecord {
  kind: 'stage';
  bolt: string;
  cycle: number;
  stage: number;
  /** What the stage is to its bolt; the last pass of a cycle is what a tightening is counted by. */
  act: 'pass' | 'last pass' | 'release' | 'mark';
  outcome: Outcome;
  reading?: number | undefined;
}

/**
 * What was done on one bolt. `released` is a release out of turn (one that the programme asks for is a stage);
 * `unsure` says that nobody knew whether the bolt had been turned, which counts as one tightening more.
 */
export type TighteningRecord =
  StageRecord | { kind: 'released'; bolt: string; unsure: boolean } | { kind: 'replaced'; bolt: string };

/**
 * All the stages of a programme in order, if nothing goes wrong: every bolt takes a stage before the next stage
 * begins, except that the marks at the very end follow their own bolt's last pass at once.
 */
export function expandProgramme(programme: Programme, bolts: readonly string[]): StageAction[] {
  requireProgramme(programme);
  requireBolts(bolts);
  const rounds = programme.cycles.flatMap((stages, cycle) => {
    const numbered = stages.map((spec, stage) => ({ cycle, stage, spec }));
    const isLast = cycle === programme.cycles.length - 1;
    const marksFrom = isLast
      ? 1 + numbered.findLastIndex(({ spec }) => spec.kind !== 'mark')
      : numbered.length;
    const finalPass = numbered.slice(marksFrom - 1);
    return [...numbered.slice(0, marksFrom - 1).map((stage) => [stage]), finalPass];
  });
  return rounds.flatMap((round) =>
    bolts.flatMap((bolt) => round.map((stage): StageAction => ({ kind: 'stage', bolt, ...stage }))),
  );
}

const expanded = new WeakMap<Programme, Map<string, StageAction[]>>();

/** A programme is asked for its stages at every act, and is never changed once it is made. */
function expandedOnce(programme: Programme, bolts: readonly string[]): StageAction[] {
  const byBolts = expanded.get(programme) ?? new Map<string, StageAction[]>();
  expanded.set(programme, byBolts);
  const key = bolts.join('\n');
  const held = byBolts.get(key);
  if (held !== undefined) return held;
  const actions = expandProgramme(programme, bolts);
  byBolts.set(key, actions);
  return actions;
}

/**
 * What is to be done next, or null when the programme is finished. After a bolt went over in any cycle: the bolts
 * beside it that hold torque are released, it is replaced, earlier marks are void, and the cap starts again at
 * its first cycle; so also after a release out of turn. Records of bolts that are not of this cap are passed over.
 */
export function nextAction(
  programme: Programme,
  bolts: readonly string[],
  done: readonly TighteningRecord[],
): TighteningAction | null {
  const actions = expandedOnce(programme, bolts);
  const cap: CapState = { passed: new Set(), holding: new Set(), condemned: new Set(), toRelease: new Map() };
  for (const record of done) if (bolts.includes(record.bolt)) applyRecord(cap, record);
  for (const bolt of bolts) {
    const because = cap.toRelease.get(bolt);
    if (because !== undefined) return { kind: 'release', bolt, because };
  }
  const condemned = bolts.find((bolt) => cap.condemned.has(bolt));
  if (condemned !== undefined) return { kind: 'replace', bolt: condemned };
  return actions.find((action) => !cap.passed.has(placeOf(action))) ?? null;
}

/** The record of a stage that `nextAction` or `expandProgramme` asked for. The reading in the stage's own unit. */
export function recordStage(
  programme: Programme,
  action: Pick<StageAction, 'bolt' | 'cycle' | 'stage'>,
  result: { outcome: Outcome; reading?: number | undefined },
): StageRecord {
  const { bolt, cycle, stage } = action;
  const stages = programme.cycles[cycle];
  const spec = stages?.[stage];
  if (stages === undefined || spec === undefined) {
    throw new RangeError(`The programme has no stage ${stage + 1} in cycle ${cycle + 1}.`);
  }
  if (result.reading !== undefined) requirePositive(result.reading, 'reading', 0);
  const pass = stage === stages.findLastIndex(isPass) ? 'last pass' : 'pass';
  return { kind: 'stage', bolt, cycle, stage, act: isPass(spec) ? pass : spec.kind, ...result };
}

/**
 * Judges a reading against its stage's target and tolerance: the torque reached (N·m), or the total angle turned
 * within this stage (degrees). The ends of the tolerance are still in it.
 */
export function judgeReading(stage: Stage, reading: number): 'ok' | 'under' | 'over' {
  if (!isPass(stage)) throw new RangeError(`A ${stage.kind} has no reading to judge.`);
  requireStage(stage);
  requirePositive(reading, 'reading', 0);
  const [target, tolerance] = [exactOf(stage.target), exactOf(stage.tolerance)];
  if (compareExact(exactOf(reading), subtractExact(target, tolerance)) < 0) return 'under';
  return compareExact(exactOf(reading), addExact(target, tolerance)) > 0 ? 'over' : 'ok';
}

/**
 * How many tightenings the bolt that is in this place now has seen: one for each cycle in which it reached its
 * last pass or went over, and one where it was let off because nobody knew. A replaced bolt starts at none.
 * The same pass recorded twice counts twice, because the bolt may have been turned twice.
 */
export function tighteningsUsed(done: readonly TighteningRecord[], bolt: string): number {
  let used = 0;
  let isCounted = false;
  for (const record of done.filter((each) => each.bolt === bolt)) {
    if (record.kind === 'replaced') {
      used = 0;
      isCounted = false;
    } else if (record.kind === 'released') {
      if (record.unsure && !isCounted) used += 1;
      isCounted = false;
    } else if (record.outcome === 'over' || record.act === 'last pass') {
      used += 1;
      isCounted = true;
    } else if (record.act !== 'mark') {
      isCounted = false;
    }
  }
  return used;
}

/**
 * Whether every bolt has enough tightenings left for the whole programme, which takes one a cycle. `used` by
 * bolt (none where it is not named); `limit` null where the sheet knows none and the supervisor judges.
 */
export function canStart(start: {
  programme: Programme;
  bolts: readonly string[];
  used: Readonly<Record<string, number>>;
  limit: number | null;
}): { ok: boolean; needs: number; wornOut: string[] } {
  const { programme, bolts, used, limit } = start;
  requireProgramme(programme);
  requireBolts(bolts);
  if (limit !== null) requireCount(limit, 'limit of tightenings');
  const needs = programme.cycles.length;
  const wornOut = bolts.filter((bolt) => {
    const sofar = Object.hasOwn(used, bolt) ? (used[bolt] ?? 0) : 0;
    requireCount(sofar, `count of tightenings of bolt ${bolt}`);
    return limit !== null && sofar + needs > limit;
  });
  return { ok: wornOut.length === 0, needs, wornOut };
}

interface CapState {
  /** Places of the stages done since the cap last started. */
  passed: Set<string>;
  holding: Set<string>;
  condemned: Set<string>;
  toRelease: Map<string, ReleaseReason>;
}

function applyRecord(cap: CapState, record: TighteningRecord): void {
  const { bolt } = record;
  if (record.kind === 'stage' && record.outcome !== 'over') {
    cap.passed.add(placeOf(record));
    if (record.act === 'release') cap.holding.delete(bolt);
    else if (record.act !== 'mark') cap.holding.add(bolt);
    return;
  }
  if (record.kind === 'stage') cap.condemned.add(bolt);
  if (record.kind === 'replaced') cap.condemned.delete(bolt);
  cap.holding.delete(bolt);
  cap.toRelease.delete(bolt);
  cap.passed.clear();
  const because = record.kind === 'stage' ? 'over' : record.kind;
  for (const other of cap.holding) if (!cap.toRelease.has(other)) cap.toRelease.set(other, because);
}

function placeOf({ bolt, cycle, stage }: Pick<StageAction, 'bolt' | 'cycle' | 'stage'>): string {
  return `${cycle}.${stage}.${bolt}`;
}

function isPass(stage: Stage): stage is Extract<Stage, { target: number }> {
  return stage.kind === 'torque' || stage.kind === 'angle';
}

function requireProgramme({ cycles }: Programme): void {
  if (cycles.length === 0) throw new RangeError('A tightening programme needs at least one cycle.');
  cycles.forEach((stages, index) => {
    if (!stages.some(isPass)) throw new RangeError(`Cycle ${index + 1} has no torque and no angle in it.`);
    stages.forEach(requireStage);
  });
  if (cycles.at(-1)?.some((stage) => stage.kind === 'release') === true) {
    throw new RangeError('The last cycle of a programme must not release the bolts.');
  }
}

function requireStage(stage: Stage): void {
  if (!isPass(stage)) return;
  requirePositive(stage.target, stage.kind);
  requirePositive(stage.tolerance, 'tolerance', 0);
}

function requireBolts(bolts: readonly string[]): void {
  if (bolts.length === 0) throw new RangeError('A tightening programme needs at least one bolt.');
  if (new Set(bolts).size < bolts.length) throw new RangeError('A bolt is named twice.');
}

function requirePositive(value: number, name: string, least?: 0): void {
  if (!Number.isFinite(value) || value < 0 || (value === 0 && least === undefined)) {
    throw new RangeError(
      `The ${name} must be ${least === undefined ? 'greater than zero' : 'zero or more'}.`,
    );
  }
}

function requireCount(value: number, name: string): void {
  if (!Number.isSafeInteger(value) || value < 0) throw new RangeError(`The ${name} must be a whole number.`);
}
