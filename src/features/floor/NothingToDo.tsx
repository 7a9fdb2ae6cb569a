import { FloorFrame } from '@/components/FloorFrame';
import { EngineBelow } from '@/components/EngineBelow';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import { openBlockers, sentence, wayOut } from '@/domain/job-order';
import { findSignature } from '@/domain/job-evidence';
import { whyNot } from '@/domain/job';
import type { JobState } from '@/domain/job-state';
import { dayAndTime } from '@/domain/time-words';
import { isOpen } from './current-step';
import { dataOf } from './done-words';
import { engineView } from '@/domain/engine-view';
import { useRun } from './run-context';

/** Nothing can be done on the job now: it has ended, or everything waits for something, and for what. */
export function NothingToDo() {
  const run = useRun();
  const { state } = run;
  const hasEnded = state.phase === 'handed over' || state.phase === 'ended unfinished';
  const waits = hasEnded ? [] : waitingFor(state);
  return (
    <FloorFrame
      {...run.cells}
      flash={run.flash}
      side={<EngineBelow {...engineView(state, undefined, run.workshop.zone)} />}
      quiet={
        hasEnded ? (
          <QuietButton label="Send now" onPress={() => void run.syncNow()} />
        ) : (
          <QuietButton label="Problem" onPress={() => run.openSheet('problem')} />
        )
      }
      main={
        hasEnded ? (
          <MainAction
            label="Back to the jobs"
            next={run.cells.sync.label.toLowerCase()}
            onPress={() => (location.hash = '')}
          />
        ) : (
          <MainAction
            label="What is open"
            next="deviations and open list"
            onPress={() => run.openSheet('job')}
          />
        )
      }
    >
      <h1 className="floor-step pb-4">{endWords(state)}</h1>
      {hasEnded && <HowItEnded />}
      <ul className="grid gap-3">
        {waits.map(({ title, why }) => (
          <li key={title} className="border-b border-rule pb-3 text-xl">
            <b>{title}</b>: {why}
          </li>
        ))}
      </ul>
    </FloorFrame>
  );
}

/** Who ended the job, when and why, and what was open then. */
function HowItEnded() {
  const { state, workshop } = useRun();
  const last = Object.values(state.steps)
    .flatMap(({ entries }) => entries)
    .concat(state.unstepped)
    .findLast(({ kind }) => kind === 'ended-unfinished' || kind === 'handed-over');
  if (!last) return null;
  const reason = last.kind === 'ended-unfinished' ? dataOf(last, 'ended-unfinished').reason : undefined;
  return (
    <div className="grid gap-3 text-xl">
      <p>
        By {last.name}, {dayAndTime(last.at, workshop.zone)}.
      </p>
      {reason !== undefined && <p>“{reason}”</p>}
      {state.open.length > 0 && <p>Still open: {state.open.map(({ name }) => name).join(', ')}.</p>}
    </div>
  );
}

function endWords(state: JobState): string {
  switch (state.phase) {
    case 'handed over':
      return 'The job is handed over';
    case 'ended unfinished':
      return 'The job was ended unfinished: not to be run';
    case 'not opened':
      return 'The job has not been opened';
    default:
      return 'Nothing can be done just now';
  }
}

const SHOWN = 6;

function waitingFor(state: JobState): { title: string; why: string }[] {
  const deviations = openBlockers(state).map((one) => ({
    title: 'Deviation',
    why: `${sentence(one.words)} ${wayOut(state, one)}`,
  }));
  const parts = state.plan.steps
    .filter(({ id }) => state.steps[id]?.status === 'waiting for a part')
    .map(({ title }) => ({ title, why: 'waits for a part' }));
  const signatures = state.plan.steps
    .filter(({ kind, id }) => kind === 'hold' && isOpen(state, id) && findSignature(state, id) !== undefined)
    .map(({ title }) => ({ title, why: 'signed, and waits to be checked: bring the tablet to the network' }));
  const known = [...deviations, ...parts, ...signatures];
  if (known.length > 0) return known.slice(0, SHOWN);
  const first = state.plan.steps.find(
    ({ id, onDemand, kind }) => onDemand !== true && kind !== 'witness' && isOpen(state, id),
  );
  const verdict = first && whyNot(state, first.id);
  return first && verdict && !verdict.ok ? [{ title: first.title, why: verdict.why }] : [];
}
