import { dayWords } from '@/domain/time-words';
import { useServer } from '@/offline/use-server';
import { toolUseAnswer, type ToolUsePeriod, type ToolWithCalibrations } from './tool-answer';

/** What was done with a tool since it was last known to be good: where to look again once it failed. */
export function ToolUses({ tool }: { tool: ToolWithCalibrations }) {
  const { data, error } = useServer(`/api/tools/${tool.id}/use`, toolUseAnswer);
  return (
    <section className="part" aria-labelledby="uses">
      <h2 className="part-title" id="uses">
        What was done with it
      </h2>
      {error && <p role="alert">{error.message}</p>}
      {data?.periods.map((period) => (
        <Period key={period.since ?? ''} period={period} hasFailed={tool.failure !== null} />
      ))}
    </section>
  );
}

function Period({ period, hasFailed }: { period: ToolUsePeriod; hasFailed: boolean }) {
  const { since, until, jobs } = period;
  const isInDoubt = until !== null || hasFailed;
  return (
    <>
      <p className="page-words">
        {periodWords(period)}
        {isInDoubt && jobs.length > 0 ? ' A calibration failed after it: look at these steps again.' : ''}
      </p>
      {jobs.length === 0 ? (
        <p className="pb-4">Nothing.</p>
      ) : (
        <ul className="tool-uses pb-4" aria-label={`Jobs since ${since ?? 'the beginning'}`}>
          {jobs.map(({ job, number, steps }) => (
            <li key={job}>
              <a href={`/jobs/${job}`} className="job-link figure">
                {number}
              </a>
              <span className="cell-note">
                {steps.map(({ title, entries }) => `${title} (${entries})`).join(', ')}
              </span>
            </li>
          ))}
        </ul>
      )}
    </>
  );
}

function periodWords({ since, until }: ToolUsePeriod): string {
  if (since === null && until === null) return 'It has no good calibration; everything is listed.';
  if (since === null) return `Until its good calibration of ${dayWords(until ?? '')}.`;
  return until === null
    ? `Since its last good calibration, ${dayWords(since)}.`
    : `Between its good calibrations of ${dayWords(since)} and ${dayWords(until)}.`;
}
