import { photosOf } from '@/domain/job-photos';
import type { JobState } from '@/domain/job-state';
import { dayAndTime } from '@/domain/time-words';

/** The contact sheet of a job. */
export function JobPhotos({ state, zone }: { state: JobState; zone: string }) {
  const photos = photosOf(state);
  return (
    <section className="part">
      <h2 className="part-title">Photographs</h2>
      {photos.length === 0 ? (
        <p className="text-soft">None yet.</p>
      ) : (
        <ul className="job-photos">
          {photos.map(({ entry, hash, subject, at, from }) => (
            <li key={entry}>
              <a href={`/api/photos/${hash}`} target="_blank" rel="noreferrer">
                <img
                  src={`/api/photos/${hash}?size=thumb`}
                  alt={subject}
                  width={160}
                  height={120}
                  loading="lazy"
                />
                <span aria-hidden="true">{subject}</span>
              </a>
              <p className="text-soft">
                {dayAndTime(at, zone)}, {from}
              </p>
            </li>
          ))}
        </ul>
      )}
    </section>
  );
}
