import { useState } from 'react';
import { QuietButton } from '@/components/QuietButton';
import { Sign } from '@/components/Sign';
import type { Deviation, JobState, OpenItem } from '@/domain/job-state';
import { findStep } from '@/domain/plan';
import { guideTo, type TabletNames } from '@/domain/deviation-guide';
import { gatesWords } from '../bars-words';
import { openWitnessPoints } from '../current-step';
import { useRun } from '../run-context';
import { dayAndTime } from '@/domain/time-words';
import { DispositionForm } from './DispositionForm';
import { Sheet } from './Sheet';

interface JobSheetProps {
  /** What the job's tablets are called. */
  tablets: TabletNames;
  onClose: () => void;
  onLeave: () => void;
  onSums: () => void;
}

/** What is open on the job: things off and things in, deviations, invitations to look. */
export function JobSheet({ tablets, onClose, onLeave, onSums }: JobSheetProps) {
  const run = useRun();
  const [disposing, setDisposing] = useState<string>();
  const { state } = run;
  const open = state.deviations.filter(({ disposed }) => !disposed);
  const deviation = open.find(({ id }) => id === disposing);
  const witness = openWitnessPoints(state);
  if (deviation)
    return (
      <DispositionForm
        deviation={deviation}
        guide={guideTo(state, deviation, tablets)}
        onDone={() => setDisposing(undefined)}
      />
    );
  return (
    <Sheet
      title={`Job ${state.number ?? ''}: what is open`}
      onClose={onClose}
      foot={
        <>
          <QuietButton shape="wide" sign="back" label="Other job" onPress={onLeave} />
          <QuietButton shape="wide" label="Sums" onPress={onSums} />
        </>
      }
    >
      <Deviations deviations={open} tablets={tablets} onDispose={setDisposing} />
      <OpenList
        state={state}
        zone={run.workshop.zone}
        onGo={(step) => {
          run.goTo(step);
          onClose();
        }}
      />
      {witness.length > 0 && (
        <section className="pb-4">
          <h3 className="form-label border-b-2 border-text pb-1">Invitations to look</h3>
          <ul className="flex flex-wrap gap-3 pt-3">
            {witness.map((step) => (
              <li key={step.id}>
                <QuietButton
                  shape="wide"
                  label={step.title}
                  onPress={() => {
                    run.goTo(step.id);
                    onClose();
                  }}
                />
              </li>
            ))}
          </ul>
        </section>
      )}
      <Disposed deviations={state.deviations.filter(({ disposed }) => disposed)} zone={run.workshop.zone} />
    </Sheet>
  );
}

interface DeviationsProps {
  deviations: Deviation[];
  tablets: TabletNames;
  onDispose: (id: string) => void;
}

function Deviations({ deviations, tablets, onDispose }: DeviationsProps) {
  const { workshop, state } = useRun();
  const rows = deviations.map((deviation) => ({ deviation, guide: guideTo(state, deviation, tablets) }));
  return (
    <section className="pb-5">
      <h3 className="form-label border-b-2 border-text pb-1">Deviations, open</h3>
      {deviations.length === 0 && <p className="pt-2 text-lg">None.</p>}
      <ul className="grid gap-3 pt-3">
        {rows.map(({ deviation, guide }) => (
          <li
            key={deviation.id}
            className="grid grid-cols-[1fr_auto] items-center gap-4 border-b border-rule pb-3"
          >
            <div>
              <p className="flex items-start gap-2 text-lg font-bold">
                <Sign name={deviation.blocks ? 'cross' : 'question'} />
                {guide?.happened ?? deviation.words}
              </p>
              {guide && (
                <p className="text-lg">
                  {guide.blocked} {guide.next}
                </p>
              )}
              <p className="text-base text-soft">
                class {deviation.class}, {deviation.raisedByName},{' '}
                {dayAndTime(deviation.raisedAt, workshop.zone)}
                {guide ? '' : deviation.blocks ? '; what follows waits' : '; nothing waits for it'}
              </p>
            </div>
            <QuietButton shape="wide" label="Dispose of it" onPress={() => onDispose(deviation.id)} />
          </li>
        ))}
      </ul>
    </section>
  );
}

const HOW: Record<OpenItem['how'], string> = {
  removed: 'off',
  placed: 'in place for now',
  counted: 'counted out',
};

function OpenList({ state, zone, onGo }: { state: JobState; zone: string; onGo: (step: string) => void }) {
  return (
    <section className="pb-5">
      <h3 className="form-label border-b-2 border-text pb-1">Open list: {state.open.length}</h3>
      {state.open.length === 0 && (
        <p className="pt-2 text-lg">Nothing is off, and nothing temporary is in.</p>
      )}
      <ul className="grid gap-x-8 gap-y-3 pt-3 @4xl/sheet:grid-cols-2">
        {state.open.map((item) => {
          const planned = state.plan.items.find(({ id }) => id === item.item);
          const closes = planned && findStep(state.plan, planned.closes);
          return (
            <li
              key={item.item}
              className="grid grid-cols-[1fr_auto] items-center gap-4 border-b border-rule pb-3"
            >
              <div>
                <p className="text-lg font-semibold">
                  {item.name}: {HOW[item.how]}
                  {item.count === undefined ? '' : `, ${item.count} pieces`}
                  {item.into === undefined ? '' : `; ${item.into}`}
                </p>
                <p className="text-base text-soft">
                  since {item.since === '' ? 'an earlier entry' : dayAndTime(item.since, zone)}
                  {planned && planned.bars.length > 0 ? `; bars ${gatesWords(planned.bars)}` : ''}
                </p>
              </div>
              {closes && <QuietButton shape="wide" label="Go to it" onPress={() => onGo(closes.id)} />}
            </li>
          );
        })}
      </ul>
    </section>
  );
}

function Disposed({ deviations, zone }: { deviations: Deviation[]; zone: string }) {
  if (deviations.length === 0) return null;
  return (
    <section>
      <h3 className="form-label border-b-2 border-text pb-1">Deviations, disposed of</h3>
      <ul className="grid gap-2 pt-3 text-base">
        {deviations.map(({ id, words, disposed }) => (
          <li key={id}>
            {words}. <b>{disposed?.disposition}</b>: {disposed?.reason} ({disposed?.name},{' '}
            {disposed && dayAndTime(disposed.at, zone)})
          </li>
        ))}
      </ul>
    </section>
  );
}
