/* The photographs of a job, read from the entries that its state keeps. */
import type { JobState, Kept } from './job-state';

/** One photograph, as a contact sheet shows it. */
export interface JobPhoto {
  entry: string;
  hash: string;
  subject: string;
  from: 'camera here' | 'from file';
  at: string;
}

/** Every photograph in the order in which it was taken, without those that were taken back or no longer count. */
export function photosOf(state: JobState): JobPhoto[] {
  const onSteps = Object.values(state.steps).flatMap(({ entries }) => entries);
  return [...state.unstepped, ...onSteps]
    .filter(({ takenBack, voided }) => takenBack === undefined && voided === undefined)
    .flatMap(asPhoto)
    .sort((a, b) => (a.at < b.at ? -1 : a.at > b.at ? 1 : 0));
}

function asPhoto({ id, at, data }: Kept): JobPhoto[] {
  if (!('photo' in data)) return [];
  const { photo, subject, from } = data;
  return [{ entry: id, hash: photo, subject, from, at }];
}
