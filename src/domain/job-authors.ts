import type { JobState, Kept } from './job-state';
import { writable } from './job-tables';

/** What is signed, seen or revoked is no work on the vehicle, and whoever does it is not at work there. */
const judgements: ReadonlySet<Kept['kind']> = new Set<Kept['kind']>([
  'signed',
  'witnessed',
  'countersigned',
  'revoked',
]);

/** Who did it, who helped, and who is at work now. */
export function noteAuthor(state: JobState, kept: Kept): JobState {
  if (kept.by === 'workshop') return state;
  const people =
    state.people[kept.by] === kept.name ? state.people : { ...state.people, [kept.by]: kept.name };
  const isWork = !judgements.has(kept.kind);
  const working =
    isWork && (state.working?.by !== kept.by || state.working.device !== kept.device)
      ? { by: kept.by, name: kept.name, since: kept.at, device: kept.device }
      : state.working;
  const next = { ...state, people, lastAt: kept.at, lastEntry: kept.id, ...(working ? { working } : {}) };
  return kept.step !== undefined && isWork ? addAuthors(next, kept.step, [kept.by, ...kept.with]) : next;
}

/** Whoever had a hand in a step: its own authors, helpers, and whoever corrects it. */
export function addAuthors(state: JobState, step: string, who: string[]): JobState {
  // A step that the plan doesn't have may have any name, also one that every object knows.
  const present = Object.hasOwn(state.authors, step) ? (state.authors[step] ?? []) : [];
  const added = who.filter((person) => !present.includes(person));
  if (added.length === 0) return state;
  const authors = writable(state, state.authors);
  authors[step] = [...present, ...added];
  return { ...state, authors };
}
