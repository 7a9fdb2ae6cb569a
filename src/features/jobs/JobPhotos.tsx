import { type JobPhoto, photosOf } from '@/domain/job-photos';
import type { JobState } from '@/domain/job-state';
import { dayAndTime } from '@/domain/time-words';
import type { MissingPhotograph } from './job-answer';

interface JobPhotosProps {
  state: JobState;
  zone: string;
  missing: MissingPhotograph[];
}

/** The contact sheet of a job; a photograph that has not come is told of in its place. */
export function JobPhotos({ state, zone, missing }: JobPhotosProps) {
  const photos = photosOf(state);
  return (
    <section className="part">
      <h2 className="part-title">Photographs</h2>
      {photos.length === 0 ? (
        <p className="text-soft">None yet.</p>
      ) : (
        <ul className="job-photos">
          {photos.map((photo) => {
            const absent = missing.find(({ entry }) => entry === photo.entry);
            return (
              <li key={photo.entry}>
                {absent ? <NotHere subject={photo.subject} tablet={absent.tablet} /> : <Here photo={photo} />}
                <p className="text-soft">
                  {dayAndTime(photo.at, zone)}, {photo.from}
                </p>
              </li>
            );
          })}
        </ul>
      )}
    </section>
  );
}

function Here({ photo: { hash, subject } }: { photo: JobPhoto }) {
  return (
    <a href={`/api/photos/${hash}`} target="_blank" rel="noreferrer">
      <img src={`/api/photos/${hash}?size=thumb`} alt={subject} width={160} height={120} loading="lazy" />
      <span aria-hidden="true">{subject}</span>
    </a>
  );
}

function NotHere({ subject, tablet }: { subject: string; tablet: string }) {
  return (
    <>
      <span className="job-photo-absent">not here yet, on {tablet}</span>
      <span>{subject}</span>
    </>
  );
}
