import { wordsOf } from '@/domain/entry-words';
import type { JobState, Kept } from '@/domain/job-state';
import { dayAndTime } from '@/domain/time-words';
import { useRun } from '../run-context';

/** A record as every place says it. */
export function keptWords(
  { plan }: Pick<JobState, 'plan'>,
  { kind, step, data }: Pick<Kept, 'kind' | 'step' | 'data'>,
): string {
  // Words are made of these three alone.
  return wordsOf({ kind, step, data } as Parameters<typeof wordsOf>[0], plan);
}

/** The record as it stands and as it will read; both stay in the trail. */
export function BeforeAfter({ kept, after }: { kept: Kept; after: Kept['data'] | undefined }) {
  const run = useRun();
  return (
    <dl className="grid gap-3 text-xl">
      <div>
        <dt className="form-label">
          Recorded by {kept.name}, {dayAndTime(kept.at, run.workshop.zone)}
        </dt>
        <dd className="font-bold">{keptWords(run.state, kept)}</dd>
      </div>
      <div>
        <dt className="form-label">
          Corrected by {run.person.name}, who then counts as an author of this work
        </dt>
        <dd className="font-bold">
          {after === undefined ? '…' : keptWords(run.state, { ...kept, data: after })}
        </dd>
      </div>
    </dl>
  );
}
