import type { JobState, Kept } from './job-state';
import type { CriticalClass } from './plan';

interface Raised {
  rule?: string;
  class: CriticalClass;
  words: string;
  blocks: boolean;
  rod?: number | undefined;
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
        raisedBy: kept.by,
        raisedByName: kept.name,
        raisedAt: kept.at,
      },
    ],
  };
}

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
