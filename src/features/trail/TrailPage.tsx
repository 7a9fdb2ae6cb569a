import { useEffect, useState } from 'react';
import { ErrorNote } from '@/components/ErrorNote';
import { TrailView } from './TrailView';
import { fetchTrail, TrailUnreadError, type ReadTrail } from './read-trail';

export interface TrailPageProps {
  job: string;
  /** The workshop's zone. */
  zone: string;
}

/** The trail of a job: fetched once, shown as a ledger, and checked by the reader's own browser. */
export function TrailPage({ job, zone }: TrailPageProps) {
  const [trail, setTrail] = useState<ReadTrail>();
  const [trouble, setTrouble] = useState<string>();
  useEffect(() => {
    let isGone = false;
    fetchTrail(job).then(
      (read) => !isGone && setTrail(read),
      (error: unknown) => {
        if (!(error instanceof TrailUnreadError)) throw error;
        if (!isGone) setTrouble(error.message);
      },
    );
    return () => {
      isGone = true;
    };
  }, [job]);
  if (trouble !== undefined) {
    return (
      <div className="p-6">
        <ErrorNote
          happened={trouble}
          kept="The trail is as it was."
          next="Load the page again, or go back to the job."
        />
      </div>
    );
  }
  return trail ? (
    <TrailView job={job} trail={trail} zone={zone} />
  ) : (
    <p className="p-6" role="status">
      Reading the trail
    </p>
  );
}
