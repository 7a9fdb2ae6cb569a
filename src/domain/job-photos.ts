/* The photographs of a job, read from the entries that its state keeps. */
import type { JobState, Kept } from './job-state';

/** One photograph, as a contact sheet shows it. */
export interface JobPhoto {
  entry: string;
  hash: string;
  subject: string;
  from: 'camera here' | 'from file';
  at: string;
  step?: string | undefined;
  /** It shows who the customer is or which vehicle, so that an erasure may take it. */
  identity?: true | undefined;
  /** The tablet that took it, on which its bytes are until they are sent. */
  device: string;
}

/** Every photograph in the order in which it was taken, without those that were taken back or no longer count. */
export function photosOf(state: JobState): JobPhoto[] {
  const onSteps = Object.values(state.steps).flatMap(({ entries }) => entries);
  return [...state.unstepped, ...onSteps]
    .filter(({ takenBack, voided }) => takenBack === undefined && voided === undefined)
    .flatMap(asPhoto)
    .sort((a, b) => (a.at < b.at ? -1 : a.at > b.at ? 1 : 0));
}

/**
 * The photographs that a handover waits for: their bytes are not there, they were not taken again, and nobody
 * who may has disposed of a deviation that names them.
 */
export function photosMissing(state: JobState, isThere: (hash: string) => boolean): JobPhoto[] {
  const photos = photosOf(state);
  return photos.filter(
    (photo, i) =>
      !isThere(photo.hash) &&
      !photos.slice(i + 1).some((later) => isSameSubject(photo, later) && isThere(later.hash)) &&
      !isDisposedOf(state, photo),
  );
}

/** What a photograph is called where it has to be named, such as "photograph 3f2a91c0". */
export function photoName(hash: string): string {
  return `photograph ${hash.slice(0, 8)}`;
}

function isSameSubject(one: JobPhoto, other: JobPhoto): boolean {
  return one.step === other.step && one.subject === other.subject;
}

function isDisposedOf(state: JobState, { hash }: JobPhoto): boolean {
  return state.deviations.some(
    ({ words, disposed }) => disposed !== undefined && words.toLowerCase().includes(photoName(hash)),
  );
}

function asPhoto({ id, at, data, step, device }: Kept): JobPhoto[] {
  if (!('photo' in data)) return [];
  const { photo, subject, from } = data;
  const marked = data.identity === true ? { identity: true as const } : {};
  return [
    { entry: id, hash: photo, subject, from, at, device, ...marked, ...(step === undefined ? {} : { step }) },
  ];
}
