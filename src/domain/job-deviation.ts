import type { Deviation, JobState, Kept } from './job-state';
import type { CriticalClass } from './plan';

interface Raised {
  rule?: string;
  class: CriticalClass;
  words: string;
  blocks: boolean;
  rod?: number | undefined;
  conflict?: Deviation['conflict'];
}

/** Opens a deviation; one that a rule opens carries the rule's code in its id, and opens once an entry. */
export function raiseDeviation(state: JobState, kept: Kept, raised: Raised): JobState {
  const id = raised.rule === undefined ? kept.id : `${kept.id}:${raised.rule}`;
  if (state.deviations.some((deviation) => deviation.id === id)) return state;
  const rod = raised.rod ?? (kept.step === undefined ? undefined : rodIn(kept.step));
  return {
    ...state,
    deviations: [
      ...state.deviations,
      {
        id,
        ...(raised.rule === undefined ? {} : { rule: raised.rule }),
        class: raised.class,
        words: raised.words,
        ...(kept.step === undefined ? {} : { step: kept.step }),
        ...(rod === undefined ? {} : { rod }),
        blocks: raised.blocks,
        ...(raised.conflict === undefined ? {} : { conflict: raised.conflict }),
        raisedBy: kept.by,
        raisedByName: kept.name,
        raisedAt: kept.at,
      },
    ],
  };
}

/**
 * Opens the deviation of a conflict. What else the same tablet had done on the same step before it heard of the
 * other goes to the deviation that is open for it: it is one matter, disposed of once.
 */
export function raiseConflict(
  state: JobState,
  kept: Kept,
  { code, why }: { code: string; why: string },
): JobState {
  const { step, device, id } = kept;
  const isPartOf = ({ disposed, conflict, ...open }: Deviation): boolean =>
    !disposed && open.step === step && conflict?.device === device && conflict.code !== NUMBER_TWICE;
  const open = step === undefined || code === NUMBER_TWICE ? undefined : state.deviations.find(isPartOf);
  if (open?.conflict === undefined) {
    const conflict = { code, device, why, entries: [id] };
    return raiseDeviation(state, kept, { rule: 'conflict', class: 'A', words: why, blocks: true, conflict });
  }
  if (open.conflict.entries.includes(id)) return state;
  return goesFor(state, open, { ...open.conflict, entries: [...open.conflict.entries, id] });
}

/**
 * Parts what came to a conflict after somebody last heard of it: their disposition goes for what they knew, and
 * the rest is open as a deviation of its own.
 */
export function partUnheard(state: JobState, deviation: Deviation, basis: number): JobState {
  const { conflict, step } = deviation;
  const kept = step === undefined ? undefined : state.steps[step]?.entries;
  if (conflict === undefined || kept === undefined) return state;
  const isUnheard = (id: string): boolean => (kept.find((one) => one.id === id)?.seq ?? 0) > basis;
  const [first, ...rest] = conflict.entries;
  const unheard = rest.filter(isUnheard);
  const opening = kept.find(({ id }) => id === unheard[0]);
  if (first === undefined || opening === undefined) return state;
  const heard = goesFor(state, deviation, {
    ...conflict,
    entries: [first, ...rest.filter((id) => !isUnheard(id))],
  });
  const why = opening.conflict ?? conflict.why;
  const raised = raiseDeviation(heard, opening, { rule: 'conflict', class: 'A', words: why, blocks: true });
  const made = raised.deviations.at(-1);
  return made === undefined ? raised : goesFor(raised, made, { ...conflict, why, entries: unheard });
}

function goesFor(
  state: JobState,
  deviation: Deviation,
  conflict: NonNullable<Deviation['conflict']>,
): JobState {
  const more = conflict.entries.length - 1;
  const others = `${more} more ${more === 1 ? 'record' : 'records'} of that tablet on this step came with it.`;
  const words = more === 0 ? conflict.why : `${conflict.why} ${others}`;
  return {
    ...state,
    deviations: state.deviations.map((one) => (one.id === deviation.id ? { ...one, words, conflict } : one)),
  };
}

/** A copied tablet is another matter each time that it shows. */
const NUMBER_TWICE = 'number-used-twice';

/** Something to ask about that blocks nothing. */
export function remark(state: JobState, kept: Kept, code: string, words: string): JobState {
  return { ...state, remarks: [...state.remarks, { code, words, at: kept.at, entry: kept.id }] };
}

/** Is there an open deviation on the step that bars what follows? */
export function isBlocked(state: JobState, stepId: string): boolean {
  return state.deviations.some((d) => d.blocks && !d.disposed && d.step === stepId);
}

function rodIn(stepId: string): number | undefined {
  const match = /@(?:rod)?(\d+)[UL]?$/.exec(stepId);
  return match?.[1] === undefined ? undefined : Number(match[1]);
}
