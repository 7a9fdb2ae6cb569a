import type { EntryData } from './entry';
import { raiseDeviation } from './job-deviation';
import { asGround } from './job-kept';
import { judgeLimit } from './job-limit';
import type { ClearanceReading, JobState, Kept, RodState } from './job-state';
import type { StepOf } from './plan';

/**
 * The readings of a rod's present assembly. Each end is judged by itself; a reading outside opens a
 * deviation; two agreeing unsure readings of one end go to the supervisor; one unsure reading asks for a
 * second, finer one.
 */
export function settleClearance(state: JobState, step: StepOf<'gauge'>): JobState {
  const rod = step.rod === undefined ? undefined : state.rods[step.rod];
  const limit = state.plan.limits[step.limit];
  if (!rod || !limit) return state;
  const kept = (state.steps[step.id]?.entries ?? []).filter(
    (entry) => entry.kind === 'gauged' && entry.voided === undefined && entry.takenBack === undefined,
  );
  let next: JobState = {
    ...state,
    rods: { ...state.rods, [rod.rod]: { ...rod, ...presentReadings(kept, state, step) } },
  };
  for (const end of ['front', 'rear'] as const) {
    const readings = kept.filter((entry) => gaugedData(entry).end === end);
    next = judgeEnd(next, rod.rod, end, readings);
  }
  return judgeTogether(next, step, rod.rod, newestGround(kept));
}

function gaugedData(kept: Kept): EntryData<'gauged'> {
  // Only entries of kind `gauged` come here, and their data was read by that kind's schema.
  return kept.data as EntryData<'gauged'>;
}

function presentReadings(
  kept: Kept[],
  state: JobState,
  step: StepOf<'gauge'>,
): Pick<RodState, 'front' | 'rear'> {
  const reading = (end: 'front' | 'rear'): ClearanceReading | undefined => {
    const entry = kept.findLast((one) => gaugedData(one).end === end);
    const limit = state.plan.limits[step.limit];
    if (!entry || !limit) return undefined;
    const { clearance, uncertainty } = gaugedData(entry);
    const { verdict, place } = judgeLimit(limit, clearance, uncertainty);
    const correction = entry.valueFrom?.id;
    return {
      entry: entry.id,
      ...(correction === undefined ? {} : { correction }),
      end,
      clearance,
      uncertainty,
      verdict,
      place,
      at: entry.at,
    };
  };
  return { front: reading('front'), rear: reading('rear') };
}

function judgeEnd(state: JobState, rod: number, end: 'front' | 'rear', readings: Kept[]): JobState {
  const last = readings.at(-1);
  const reading = state.rods[rod]?.[end];
  if (!last || !reading || reading.verdict === 'inside') return state;
  const ground = asGround(last);
  const { clearance, unit } = gaugedData(last);
  const words = `Rod ${rod}, ${end}: ${clearance} ${unit}`;
  if (reading.verdict === 'outside') {
    return raiseDeviation(state, ground, {
      rule: 'clearance-outside',
      class: 'A',
      words: `${words} is outside the limits`,
      blocks: true,
      rod,
    });
  }
  if (reading.verdict === 'no limit known') {
    return raiseDeviation(state, ground, {
      rule: 'no-limit-known',
      class: 'A',
      words: `${words}: no limit is known, the supervisor judges`,
      blocks: true,
      rod,
    });
  }
  const before = readings.at(-2);
  if (!before || !agree(before, last)) return state;
  return raiseDeviation(state, ground, {
    rule: 'clearance-unsure',
    class: 'A',
    words: `${words} was read twice, too near a limit to tell`,
    blocks: true,
    rod,
  });
}

/** Two readings agree when they lie within their uncertainties of each other. */
function agree(one: Kept, other: Kept): boolean {
  const a = gaugedData(one);
  const b = gaugedData(other);
  return (
    Math.abs(Number(a.clearance) - Number(b.clearance)) <=
    Number(a.uncertainty) + Number(b.uncertainty) + 1e-9
  );
}

/** The newest of what the readings of a rod come from: a correction of either, else the last reading. */
function newestGround(readings: Kept[]): Kept | undefined {
  const corrected = readings.filter(({ valueFrom }) => valueFrom !== undefined).map(asGround);
  return corrected.toSorted((a, b) => a.at.localeCompare(b.at)).at(-1) ?? readings.at(-1);
}

/** Taper along one journal and spread across the rods, where the sheet sets a limit. */
function judgeTogether(
  state: JobState,
  step: StepOf<'gauge'>,
  rod: number,
  last: Kept | undefined,
): JobState {
  const limit = state.plan.limits[step.limit];
  const present = state.rods[rod];
  if (!last || !limit || !present?.front || !present.rear) return state;
  const front = Number(present.front.clearance);
  const rear = Number(present.rear.clearance);
  let next = state;
  const taper = Math.abs(front - rear);
  const told = Number(present.front.uncertainty) + Number(present.rear.uncertainty);
  if (limit.taper !== undefined && taper > Number(limit.taper) + 1e-9 && taper > told) {
    next = raiseDeviation(next, last, {
      rule: 'taper',
      class: 'A',
      words: `Rod ${rod}: front and rear differ by ${taper.toFixed(3)} ${limit.unit}, more than ${limit.taper}`,
      blocks: true,
      rod,
    });
  }
  if (limit.spread === undefined) return next;
  const all = Object.values(state.rods).flatMap((one) =>
    [one.front, one.rear].flatMap((r) => (r ? [Number(r.clearance)] : [])),
  );
  const spread = Math.max(...all) - Math.min(...all);
  if (spread > Number(limit.spread) + 1e-9) {
    // The odd one out is a question even when it is inside; it doesn't bar the next rod.
    next = raiseDeviation(next, last, {
      rule: 'spread',
      class: 'B',
      words: `Rod ${rod} stands out: the rods now differ by ${spread.toFixed(3)} ${limit.unit}, more than ${limit.spread}`,
      blocks: false,
      rod,
    });
  }
  return next;
}
