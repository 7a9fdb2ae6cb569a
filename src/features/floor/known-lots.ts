import type { JobState } from '@/domain/job-state';

/**
 * Lots known from the kit check for a part: its own, or those of a part whose name says all that is asked for
 * and more. A part that is only alike never lends its lot: a wrong lot in the record is worse than a typed one.
 */
export function knownLots(state: JobState, part: string): string[] {
  const own = state.lots[part] ?? [];
  if (own.length > 0) return own;
  const asked = wordsOf(part);
  return lotsOf(state, (other) => {
    const words = wordsOf(other);
    return asked.length > 0 && asked.every((word) => words.includes(word));
  });
}

/** Lots of shells of one grade; where the kit check tells no grades apart, of any shells. */
export function shellLots(state: JobState, grade: string): string[] {
  const grades = state.plan.engine.shells.grades.map((one) => one.grade.toLowerCase());
  const isShell = (part: string) => wordsOf(part).includes('shell');
  const names = (part: string, one: string) => wordsOf(part).includes(one.replace(/s$/, ''));
  return lotsOf(state, (part) => {
    if (!isShell(part)) return false;
    return names(part, grade.toLowerCase()) || !grades.some((one) => names(part, one));
  });
}

function lotsOf(state: JobState, isMeant: (part: string) => boolean): string[] {
  return [...new Set(Object.entries(state.lots).flatMap(([part, lots]) => (isMeant(part) ? lots : [])))];
}

/** The words of a part's name, without plural endings. */
function wordsOf(part: string): string[] {
  return part
    .toLowerCase()
    .split(/[^a-z0-9]+/)
    .filter((word) => word !== '')
    .map((word) => word.replace(/s$/, ''));
}
