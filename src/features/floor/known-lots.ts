import type { JobState } from '@/domain/job-state';

/** Lots known for a part from the kit check; where it has none of its own, those of parts that share a word with it. */
export function knownLots(state: JobState, part: string): string[] {
  const own = state.lots[part] ?? [];
  if (own.length > 0) return own;
  const words = wordsOf(part);
  return lotsOf(state, (other) => wordsOf(other).some((word) => words.includes(word)));
}

/** Lots of shells of one grade; where the kit check tells no grades apart, of any shells. */
export function shellLots(state: JobState, grade: string): string[] {
  const isShell = (part: string) => wordsOf(part).includes('shell');
  const ofGrade = lotsOf(
    state,
    (part) =>
      isShell(part) &&
      part
        .toLowerCase()
        .split(/[^a-z0-9]+/)
        .includes(grade.toLowerCase()),
  );
  return ofGrade.length > 0 ? ofGrade : lotsOf(state, isShell);
}

function lotsOf(state: JobState, isMeant: (part: string) => boolean): string[] {
  return [...new Set(Object.entries(state.lots).flatMap(([part, lots]) => (isMeant(part) ? lots : [])))];
}

/** The words of a part's name that tell it from others, without plural endings. */
function wordsOf(part: string): string[] {
  return part
    .toLowerCase()
    .split(/[^a-z0-9]+/)
    .filter((word) => word.length > 3 && !COMMON_WORDS.has(word))
    .map((word) => word.replace(/s$/, ''));
}

const COMMON_WORDS = new Set([
  'with',
  'from',
  'each',
  'grade',
  'rods',
  'engine',
  'connecting',
  'lower',
  'upper',
]);
