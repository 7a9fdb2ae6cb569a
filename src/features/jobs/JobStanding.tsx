import { Notice } from '@/components/Notice';
import type { EntryData } from '@/domain/entry';
import type { JobState, Kept } from '@/domain/job-state';
import { dayAndTime } from '@/domain/time-words';

/** What a job is that does not run: parked, or ended unfinished; since when, by whom, and why. */
export function JobStanding({ state, zone }: { state: JobState; zone: string }) {
  if (state.phase === 'parked') {
    const kept = lastOfJob(state, 'parked');
    const note = kept && (kept.data as EntryData<'parked'>).note;
    return (
      <Notice tone="unsure" title={`Parked, made safe${by(kept, zone)}`}>
        {note !== undefined && <p>{note}</p>}
        <p>It is resumed on the Floor. Until then nothing of the work can be recorded.</p>
      </Notice>
    );
  }
  if (state.phase !== 'ended unfinished') return null;
  const kept = lastOfJob(state, 'ended-unfinished');
  const { reason, open = [] } = (kept?.data ?? {}) as Partial<EntryData<'ended-unfinished'>>;
  return (
    <Notice tone="stop" title="Ended unfinished. The engine is not to be run.">
      <p>
        Ended{by(kept, zone)}
        {reason !== undefined && `: ${reason}`}.
      </p>
      {open.length > 0 && <p>Left open: {open.join(', ')}.</p>}
    </Notice>
  );
}

function by(kept: Kept | undefined, zone: string): string {
  return kept === undefined ? '' : ` by ${kept.name}, ${dayAndTime(kept.at, zone)}`;
}

/** The last entry of a kind that still counts, wherever it is kept. */
function lastOfJob(state: JobState, kind: Kept['kind']): Kept | undefined {
  return [...state.unstepped, ...Object.values(state.steps).flatMap(({ entries }) => entries)]
    .filter((kept) => kept.kind === kind && kept.takenBack === undefined && kept.voided === undefined)
    .sort((one, other) => one.at.localeCompare(other.at))
    .at(-1);
}
