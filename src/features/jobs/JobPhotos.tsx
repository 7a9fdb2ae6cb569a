import { Fragment } from 'react';
import { type JobPhoto, photosOf } from '@/domain/job-photos';
import type { JobState } from '@/domain/job-state';
import { dayAndTime } from '@/domain/time-words';
import type { MissingPhotograph, PhotographElsewhere } from './job-answer';

interface JobPhotosProps {
  state: JobState;
  zone: string;
  missing: MissingPhotograph[];
  /** Those of the photographs that other jobs show as well. */
  elsewhere: PhotographElsewhere[];
}

/** The contact sheet of a job; a photograph that has not come is told of in its place. */
export function JobPhotos({ state, zone, missing, elsewhere }: JobPhotosProps) {
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
                <SamePicture
                  twins={photos.filter(({ hash, entry }) => hash === photo.hash && entry !== photo.entry)}
                  elsewhere={elsewhere.find(({ hash }) => hash === photo.hash)}
                />
              </li>
            );
          })}
        </ul>
      )}
    </section>
  );
}

/** The same bytes a second time are not proof of a second thing: it is said where. */
function SamePicture({
  twins,
  elsewhere,
}: {
  twins: JobPhoto[];
  elsewhere: PhotographElsewhere | undefined;
}) {
  const { jobs = [], others = 0 } = elsewhere ?? {};
  if (twins.length === 0 && jobs.length === 0 && others === 0) return null;
  return (
    <p className="job-photo-again">
      The same picture{' '}
      {[
        ...twins.map(({ entry, subject }) => <Fragment key={entry}>stands here for “{subject}”</Fragment>),
        ...jobs.map(({ id, number }) => (
          <Fragment key={id}>
            is in job <a href={`/jobs/${id}`}>{number}</a>
          </Fragment>
        )),
        ...(others > 0
          ? [<Fragment key="others">is in {others === 1 ? 'another job' : `${others} other jobs`}</Fragment>]
          : []),
      ].map((part, i) => (
        <Fragment key={part.key}>
          {i > 0 && ' and '}
          {part}
        </Fragment>
      ))}
    </p>
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
