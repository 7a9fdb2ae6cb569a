import { QuietButton } from '@/components/QuietButton';
import { Sign } from '@/components/Sign';
import type { JobRow } from '@/offline/database';
import { dayWords } from '@/domain/time-words';

export interface JobRowsProps {
  jobs: JobRow[];
  working: string | null;
  isOnline: boolean;
  /** How many records of a job the server refused. */
  refused?: ReadonlyMap<string, number> | undefined;
  onOpen: (job: string) => void;
  onKeep: (job: string) => void;
}

/** The jobs as large rows, each with whether it works here without a network. */
export function JobRows({ jobs, working, isOnline, refused, onOpen, onKeep }: JobRowsProps) {
  return (
    <ul className="grid gap-3 pt-4">
      {jobs.map((job) => (
        <li key={job.id} className="flex gap-3">
          <button
            type="button"
            className="grid min-h-22 flex-1 items-center gap-x-6 gap-y-1 rounded-md border-2 border-strong bg-sheet px-5 py-3 text-left aria-disabled:border aria-disabled:border-rule aria-disabled:text-soft @4xl/floor-main:grid-cols-[1fr_auto]"
            aria-disabled={!job.availableOffline && !isOnline ? true : undefined}
            onClick={() => (job.availableOffline || isOnline ? onOpen(job.id) : undefined)}
          >
            <span>
              <span className="block text-2xl font-bold">
                Job {job.number}, {job.engine}
              </span>
              <span className="block text-lg text-soft">{jobNote(job, working)}</span>
              <RefusedWords count={refused?.get(job.id) ?? 0} />
            </span>
            <span className="text-lg font-bold">{placeWords(job, isOnline)}</span>
          </button>
          {!job.availableOffline && (
            <QuietButton
              shape="wide"
              label="Make available offline"
              why={isOnline ? undefined : 'no network'}
              onPress={() => onKeep(job.id)}
            />
          )}
        </li>
      ))}
    </ul>
  );
}

function RefusedWords({ count }: { count: number }) {
  if (count === 0) return null;
  return (
    <span className="flex items-center gap-2 text-lg font-bold text-outside">
      <Sign name="cross" />
      {count} refused: open it to see why
    </span>
  );
}

function jobNote(job: JobRow, working: string | null): string {
  const parts = [
    job.registration,
    job.phase,
    job.promisedOn === undefined ? undefined : `promised ${dayWords(job.promisedOn.slice(0, 10))}`,
    working !== null && job.people.includes(working) ? 'yours' : undefined,
  ];
  return parts.filter((part) => part !== undefined && part !== '').join(' · ');
}

function placeWords({ availableOffline, stopped }: JobRow, isOnline: boolean): string {
  if (stopped) return stopped.words;
  if (availableOffline) return 'works offline';
  return isOnline ? 'needs the network' : 'not on this tablet';
}
