import type { JobState, Kept } from '@/domain/job-state';

const HOUR = 60 * 60 * 1000;
const MINUTE = 60 * 1000;
/** Whoever recorded nothing on the job for this long begins a shift. */
const SHIFT_GAP_MS = 10 * HOUR;
/** After so long without a record on the job the tablet may have changed hands unseen. */
const IDLE_MS = 30 * MINUTE;

/** Whether a change to this person asks for their PIN: the first of their shift, or after a long silence. */
export function needsPin(state: JobState, person: string, now: number): boolean {
  const last = newestBy(state, person);
  if (last === undefined || now - last > SHIFT_GAP_MS) return true;
  return state.lastAt === undefined || now - Date.parse(state.lastAt) > IDLE_MS;
}

/** Whether someone else has worked on the job last, or another tablet has, so that it is taken over first. */
export function mustTakeOver(state: JobState, person: string, device?: string): boolean {
  if (state.working === undefined) return false;
  if (state.working.by === person && !isElsewhere(state, device)) return false;
  return Object.values(state.steps).some(({ entries }) => entries.some(isWork));
}

/** Whether the work on the job was last done at another tablet than this. */
export function isElsewhere({ working }: JobState, device: string | undefined): boolean {
  return device !== undefined && working !== undefined && working.device !== device;
}

function isWork({ kind }: Kept): boolean {
  return kind !== 'photographed' && kind !== 'signed' && kind !== 'witnessed' && kind !== 'countersigned';
}

function newestBy(state: JobState, person: string): number | undefined {
  let newest: number | undefined;
  const lists = [state.unstepped, ...Object.values(state.steps).map(({ entries }) => entries)];
  for (const entries of lists) {
    const last = entries.findLast(({ by }) => by === person);
    if (last) newest = Math.max(newest ?? 0, Date.parse(last.at));
  }
  return newest;
}
