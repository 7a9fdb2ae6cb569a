/*
 * A state that anybody holds is never changed in place. But whoever folds many entries in one go holds the
 * states in between alone, and copying a table of hundreds of steps for each of them is most of the work. So
 * such a folder says so, and then a table is copied once and written to after that.
 */
import type { JobState } from './job-state';

const HELD_ALONE = Symbol('tables that only the folder holds');

type Folding = JobState & { [HELD_ALONE]?: WeakSet<object> };

/** The same state for folding many entries onto: of what comes of it, keep only what `endFolding` gives out. */
export function beginFolding(state: JobState): JobState {
  const folding: Folding = { ...state, [HELD_ALONE]: new WeakSet() };
  return folding;
}

/** A state that was folded many entries onto, to be held by anybody and never changed again. */
export function endFolding(state: JobState): JobState {
  const given: Folding = { ...state };
  Reflect.deleteProperty(given, HELD_ALONE);
  return given;
}

/** A table of the state to write to: a copy, or the table itself where only the folder holds it. */
export function writable<T extends object>(state: JobState, table: T): T {
  const heldAlone = (state as Folding)[HELD_ALONE];
  if (heldAlone?.has(table) === true) return table;
  const copy = { ...table };
  heldAlone?.add(copy);
  return copy;
}
