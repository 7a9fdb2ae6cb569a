import { nextSteps, whyNot } from '@/domain/job';
import { guideTo } from '@/domain/deviation-guide';
import { correctionOver } from '@/domain/job-countersign';
import { openBlockers } from '@/domain/job-order';
import type { JobState } from '@/domain/job-state';
import { holdPointName, holdPointOf } from '@/domain/signature-view';
import { dayAndTime } from '@/domain/time-words';
import type { MissingPhotograph } from './job-answer';

export interface JobBlocksProps {
  state: JobState;
  zone: string;
  waiting: { step: string; holdPoint: string; title: string }[];
  missingPhotographs: MissingPhotograph[];
  /** The tablets that recorded in the job. */
  tablets: { id: string; name: string }[];
}

/** What stands in the way: signatures that are due, open deviations, parts, and what is still open. */
export function JobBlocks({ state, zone, waiting, missingPhotographs, tablets }: JobBlocksProps) {
  const names = new Map(tablets.map(({ id, name }) => [id, name]));
  const awaited = isOver(state) ? [] : missingPhotographs.filter(({ isAwaited }) => isAwaited);
  const things = [
    ...waiting.map(({ step, title }) => ({
      key: step,
      what: `Signature due: ${holdPointName(title)}`,
      note: 'at the vehicle, on the Floor',
    })),
    ...openBlockers(state).map((deviation) => {
      const guide = guideTo(state, deviation, names);
      return {
        key: deviation.id,
        what: `Deviation, class ${deviation.class}: ${guide?.happened ?? deviation.words}`,
        note: `${deviation.raisedByName}, ${dayAndTime(deviation.raisedAt, zone)}`,
        ...(guide && { more: `${guide.blocked} ${guide.next} It is disposed of on the Floor.` }),
        ...(correctionOver(state, deviation.id) && {
          more: 'Its value was corrected since. It rests once that is countersigned (under “Corrected”), or is disposed of on the Floor.',
        }),
      };
    }),
    ...state.plan.steps
      .filter(({ id }) => state.steps[id]?.status === 'waiting for a part')
      .map(({ id, title }) => ({ key: id, what: `Waiting for a part: ${title}`, note: '' })),
    ...state.signatures
      .filter(({ checkedAt, reopened }) => checkedAt === undefined && reopened === undefined)
      .map(({ entry, step }) => ({
        key: entry,
        what: `Signed, to be checked: ${holdPointOf(state.plan, step)}`,
        note: 'bring the tablet to the network',
      })),
    ...awaited.map(({ entry, subject, name, tablet, at }) => ({
      key: entry,
      what: `Handover waits for a photograph: ${subject}`,
      note: `${name}, taken ${dayAndTime(at, zone)} on ${tablet}: bring it to the network`,
    })),
    ...barred(state),
  ];
  return (
    <section className="part">
      <h2 className="part-title">What blocks it</h2>
      {things.length === 0 ? <p>{nothingWords(state)}</p> : <BlockList things={things} />}
      {awaited.length > 0 && (
        <p className="mt-2 text-soft">
          Is a photograph lost? Take it again at its step on the Floor, or raise a deviation that names it (
          <b>{awaited[0]?.name}</b>) and have it disposed of.
        </p>
      )}
      {state.open.length > 0 && (
        <>
          <h3 className="form-label mt-4">Taken off or put in, still open</h3>
          <p>
            {state.open
              .map(({ name, count }) => (count === undefined ? name : `${name} (${count})`))
              .join(', ')}
          </p>
        </>
      )}
    </section>
  );
}

function nothingWords(state: JobState): string {
  if (isOver(state)) return 'Nothing: the job is over.';
  return state.phase === 'parked' ? 'Only that it is parked.' : 'Nothing blocks it.';
}

function isOver({ phase }: JobState): boolean {
  return phase === 'handed over' || phase === 'ended unfinished';
}

function BlockList({ things }: { things: { key: string; what: string; note: string; more?: string }[] }) {
  return (
    <ul className="job-list">
      {things.map(({ key, what, note, more }) => (
        <li key={key}>
          <b>{what}</b>
          {note !== '' && <span className="text-soft"> {note}</span>}
          {more !== undefined && <p>{more}</p>}
        </li>
      ))}
    </ul>
  );
}

/** A job that runs and has nothing that can be done says why at its first open step. */
function barred(state: JobState): { key: string; what: string; note: string }[] {
  if (state.phase !== 'running' || nextSteps(state).length > 0) return [];
  const first = state.plan.steps.find(
    ({ id, onDemand }) => onDemand !== true && state.steps[id]?.status === 'open',
  );
  const verdict = first && whyNot(state, first.id);
  // A deviation that is open stands in the list already.
  return first && verdict && !verdict.ok && verdict.code !== 'deviation-open'
    ? [{ key: first.id, what: `${first.title}: ${verdict.why}`, note: verdict.unlock ?? '' }]
    : [];
}
