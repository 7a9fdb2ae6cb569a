import type { PlaceRow } from './database';
import type { Surroundings } from './surroundings';

const MINUTE = 60 * 1000;
/** After this long without a touch the Floor asks what became of the action that it had shown. */
export const AWAY_AFTER_MS = 3 * MINUTE;

/** Where the technician was on a job, or undefined before the first time. */
export async function readPlace({ db }: Surroundings, job: string): Promise<PlaceRow | undefined> {
  return db.places.get(job);
}

/** Keeps where the technician is, so that a reload comes back to exactly this. */
export async function keepPlace(
  s: Surroundings,
  job: string,
  { step, screen }: Pick<PlaceRow, 'step' | 'screen'>,
): Promise<void> {
  await s.db.places.put({ job, step, screen, lastActivityAt: s.now() });
}

/** Notes that somebody touched the screen of a job. */
export async function noteActivity(s: Surroundings, job: string): Promise<void> {
  await s.db.places.update(job, { lastActivityAt: s.now() });
}

/** Was nobody at it for so long that the next action may have been done meanwhile? */
export function wasAway(place: Pick<PlaceRow, 'lastActivityAt'>, now: number): boolean {
  return now - place.lastActivityAt >= AWAY_AFTER_MS;
}
