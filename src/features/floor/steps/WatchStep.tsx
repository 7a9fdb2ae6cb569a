import { useState } from 'react';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import { Sign } from '@/components/Sign';
import { TimerFace } from '@/components/TimerFace';
import { activeEntries, lastOf } from '@/domain/job-kept';
import type { Kept } from '@/domain/job-state';
import type { StepOf } from '@/domain/plan';
import { dataOf } from '../done-words';
import { NextAction } from '../NextAction';
import { NoteField } from '../NoteField';
import { RecordAction } from '../RecordAction';
import { StepCautions, StepFrame } from '../StepFrame';
import { useRun } from '../run-context';
import { useSeconds } from '../use-seconds';
import { WatchCheck, checkWords } from './WatchCheck';

type WatchPlan = StepOf<'watch'>;
const MINUTE = 60;

/** A watch over a set time with looks at set moments; the time runs from the record of its start. */
export function WatchStep({ step }: { step: WatchPlan }) {
  const { state } = useRun();
  const started = lastOf(state.steps[step.id], 'watch-started');
  const ended = lastOf(state.steps[step.id], 'watch-ended');
  if (ended) return <WatchEnded step={step} ended={ended} />;
  if (!started) return <WatchStart step={step} />;
  return <WatchRunning step={step} startedAt={Date.parse(started.at)} />;
}

function WatchStart({ step }: { step: WatchPlan }) {
  return (
    <StepFrame
      step={step}
      main={
        <RecordAction
          label="Start the watch"
          next={`${step.minutes} minutes`}
          drafts={() => [{ kind: 'watch-started', step: step.id, data: {} }]}
        />
      }
    >
      <ol className="grid gap-1.5 text-lg" aria-label="Looks at">
        {step.checks.map((check) => (
          <li key={check.id}>
            <span className="figure">{secondsWords(check.atSeconds)}</span> <CheckName check={check} />
          </li>
        ))}
      </ol>
    </StepFrame>
  );
}

function CheckName({ check }: { check: WatchPlan['checks'][number] }) {
  const { state } = useRun();
  return (
    <>
      {checkWords(state, check)}
      {check.stop === true && <b> (stop if not)</b>}
    </>
  );
}

function WatchRunning({ step, startedAt }: { step: WatchPlan; startedAt: number }) {
  const run = useRun();
  const [isEndingEarly, setEndingEarly] = useState(false);
  const elapsed = Math.max(0, (useSeconds(run.now, true) - startedAt) / 1000);
  const inAll = Number(step.minutes) * MINUTE;
  const answered = answeredChecks(activeEntries(run.state.steps[step.id]));
  const open = step.checks.filter(({ id }) => !answered.has(id)).sort((a, b) => a.atSeconds - b.atSeconds);
  const [next] = open;
  const due = next && (next.atSeconds <= elapsed || elapsed >= inAll) ? next : undefined;
  const badStop = step.checks.find(({ id, stop }) => stop === true && answered.get(id) === false);
  if (isEndingEarly || badStop) {
    return (
      <EndEarly
        step={step}
        isStop={badStop !== undefined}
        onBack={badStop ? undefined : () => setEndingEarly(false)}
      />
    );
  }
  if (due) return <WatchCheck key={due.id} step={step} check={due} left={inAll - elapsed} />;
  const isOver = elapsed >= inAll;
  return (
    <StepFrame
      step={step}
      heading={<h1 className="floor-step pb-3">{step.title}</h1>}
      quiet={isOver ? undefined : <QuietButton label="End early" onPress={() => setEndingEarly(true)} />}
      main={
        isOver ? (
          <RecordAction
            label="End the watch"
            drafts={() => [{ kind: 'watch-ended', step: step.id, data: { early: false } }]}
          />
        ) : (
          <MainAction
            label="Watching"
            why={next ? `next look at ${secondsWords(next.atSeconds)}` : 'until the time is over'}
            onPress={() => undefined}
          />
        )
      }
    >
      <TimerFace
        label={step.title}
        secondsLeft={inAll - elapsed}
        secondsInAll={inAll}
        words={
          next ? `${checkWords(run.state, next)} at ${secondsWords(next.atSeconds)}` : 'all looks are done'
        }
      />
      <div className="pt-4">
        <StepCautions step={step} />
      </div>
    </StepFrame>
  );
}

function answeredChecks(entries: Kept[]): Map<string, boolean> {
  return new Map(
    entries.flatMap((kept) => {
      if (kept.kind !== 'watch-checked') return [];
      const { check, ok } = dataOf(kept, 'watch-checked');
      return [[check, ok] as const];
    }),
  );
}

const REASONS = [
  'no oil pressure',
  'a leak',
  'a noise',
  'too hot',
  'smoke',
  'someone came under the vehicle',
];

function EndEarly({
  step,
  isStop,
  onBack,
}: {
  step: WatchPlan;
  isStop: boolean;
  onBack: (() => void) | undefined;
}) {
  const [reason, setReason] = useState(isStop ? 'stopped: a look that must be in order was not' : '');
  return (
    <StepFrame
      step={step}
      heading={
        isStop ? (
          <p
            role="alert"
            className="mb-4 flex items-center gap-4 rounded-md border-4 border-outside px-6 py-5 text-5xl font-extrabold text-outside"
          >
            <Sign name="cross" />
            Stop the engine now
          </p>
        ) : (
          <h1 className="floor-step pb-4">End the watch early</h1>
        )
      }
      quiet={onBack && <QuietButton label="Back" onPress={onBack} />}
      main={
        <RecordAction
          label={isStop ? 'Stopped' : 'End it early'}
          why={reason.trim() === '' ? 'say why' : undefined}
          drafts={() => [
            { kind: 'watch-ended', step: step.id, data: { early: true, reason: reason.trim() } },
          ]}
        />
      }
    >
      <NoteField label="Why it ended early" phrases={REASONS} value={reason} onChange={setReason} />
    </StepFrame>
  );
}

function WatchEnded({ step, ended }: { step: WatchPlan; ended: Kept }) {
  const { state } = useRun();
  const { early, reason } = dataOf(ended, 'watch-ended');
  return (
    <StepFrame
      step={step}
      heading={<h1 className="floor-step pb-4">{step.title}</h1>}
      main={<NextAction step={step} />}
    >
      <p className="pb-3 text-2xl font-bold">
        {early ? `Ended early: ${reason ?? ''}` : 'Watched to its end'}
      </p>
      <ul className="grid gap-2 text-lg">
        {activeEntries(state.steps[step.id]).map((kept) => {
          if (kept.kind !== 'watch-checked') return null;
          const { check, ok, value, unit } = dataOf(kept, 'watch-checked');
          const planned = step.checks.find(({ id }) => id === check);
          return (
            <li key={kept.id} className="flex items-center gap-3">
              <Sign name={ok ? 'tick' : 'cross'} />
              {planned ? checkWords(state, planned) : check}
              {value !== undefined && (
                <span className="figure font-semibold">
                  {value} {unit}
                </span>
              )}
            </li>
          );
        })}
      </ul>
    </StepFrame>
  );
}

function secondsWords(seconds: number): string {
  if (seconds < MINUTE) return `${seconds} s`;
  const rest = seconds % MINUTE;
  return rest === 0 ? `${seconds / MINUTE} min` : `${Math.floor(seconds / MINUTE)} min ${rest} s`;
}
