/* The reading that was kept last, for as long as nothing was recorded after it. */
import { isBlocked } from '@/domain/job-deviation';
import { judgeLimit } from '@/domain/job-limit';
import { predictionWords } from '@/domain/job-prediction';
import type { JobState, Kept, RodState } from '@/domain/job-state';
import { findStep, type PlanLimit, type PlanStep, type StepOf } from '@/domain/plan';
import type { VerdictKind } from '@/components/Verdict';
import { dataOf } from './done-words';
import { taperWords, targetWords } from './gauge-reading';
import { lastAct } from './last-act';
import { limitWords } from './LimitBand';

export interface LastReading {
  kept: Kept;
  /** The values as they were read; two where both ends of a crankpin are. */
  values: { label: string; value: string; number: number; uncertainty?: number | undefined }[];
  unit: string;
  verdict: VerdictKind;
  /** Another word than the verdict's usual one. */
  word?: string | undefined;
  /** Where it lies, in words. */
  words: string;
  /** What it lies between, where there is a scale for it. */
  limit?: PlanLimit | undefined;
  /** An oil clearance lies between tight and wide. */
  isClearance: boolean;
}

/** What was read last and how it stands to its limits; undefined when the last act was no reading. */
export function lastReading(state: JobState): LastReading | undefined {
  const [kept] = lastAct(state);
  const step = kept?.step === undefined ? undefined : findStep(state.plan, kept.step);
  if (!kept || !step) return undefined;
  switch (step.kind) {
    case 'gauge':
      return kept.kind === 'gauged' ? clearanceRead(state, step, kept) : undefined;
    case 'read':
      return kept.kind === 'read' ? valueRead(state, step, kept) : undefined;
    case 'count':
      return kept.kind === 'counted' && step.side === 'in' ? countedBack(state, step, kept) : undefined;
    default:
      return undefined;
  }
}

function clearanceRead(state: JobState, step: StepOf<'gauge'>, kept: Kept): LastReading | undefined {
  const rod = step.rod === undefined ? undefined : state.rods[step.rod];
  const limit = state.plan.limits[step.limit];
  const readings = rod ? [rod.front, rod.rear].filter((reading) => reading !== undefined) : [];
  const last = readings.find(({ end }) => end === dataOf(kept, 'gauged').end);
  if (!rod || !limit || !last) return undefined;
  const odd = readings.find(({ verdict }) => verdict !== 'inside') ?? last;
  return {
    kept,
    values: readings.map(({ end, clearance, uncertainty }) => ({
      label: `rod ${rod.rod}, ${end}`,
      value: clearance,
      number: Number(clearance),
      uncertainty: Number(uncertainty),
    })),
    unit: limit.unit,
    verdict: odd.verdict === 'no limit known' ? 'none' : odd.verdict,
    ...(readings.length > 1 && odd.verdict === 'inside' ? { word: 'Both inside' } : {}),
    words: clearanceWords(rod, limit, odd),
    limit,
    isClearance: true,
  };
}

function clearanceWords(rod: RodState, limit: PlanLimit, odd: NonNullable<RodState['front']>): string {
  if (odd.verdict !== 'inside') return limitWords(limit);
  const words = taperWords(rod, limit.unit) ?? targetWords(odd, limit);
  const prediction = predictionWords(rod);
  return prediction === undefined ? words : `${prediction}; ${words}`;
}

function valueRead(state: JobState, step: StepOf<'read'>, kept: Kept): LastReading | undefined {
  const limit = state.plan.limits[step.limit];
  if (!limit) return undefined;
  const { value, unit } = dataOf(kept, 'read');
  const { verdict } = judgeLimit(limit, value, limit.uncertainty ?? '0');
  return {
    kept,
    values: [{ label: shortLabel(step, limit), value, number: Number(value) }],
    unit,
    verdict: verdict === 'no limit known' ? 'none' : verdict,
    words: limitWords(limit),
    limit,
    isClearance: false,
  };
}

function shortLabel({ rod }: PlanStep, { title }: PlanLimit): string {
  return rod === undefined ? title : `rod ${rod}, ${title.replace(/ of the rod$/, '').toLowerCase()}`;
}

function countedBack(state: JobState, step: StepOf<'count'>, kept: Kept): LastReading | undefined {
  const { count } = dataOf(kept, 'counted');
  const isOff = isBlocked(state, step.id);
  return {
    kept,
    values: [{ label: step.what, value: String(count), number: count }],
    unit: '',
    verdict: isOff ? 'outside' : 'inside',
    word: isOff ? 'Not all of them' : 'All back',
    words: `${state.tallies[step.tally]?.out ?? '?'} went out`,
    isClearance: false,
  };
}
