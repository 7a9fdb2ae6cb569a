import { useState } from 'react';
import { FloorFrame } from '@/components/FloorFrame';
import { MainAction } from '@/components/MainAction';
import { Notice } from '@/components/Notice';
import { PinPad } from '@/components/PinPad';
import { QuietButton } from '@/components/QuietButton';
import { findKept } from '@/domain/job';
import { unsignedWords, unsignedWork } from '@/domain/job-work';
import { dayAndTime } from '@/domain/time-words';
import { capInHand, capWords } from './cap-in-hand';
import { dataOf, doneWords } from './done-words';
import { afterRefusal } from './refused-words';
import { useRun } from './run-context';
import { needsPin } from './shift';
import { SheetRefusal } from './sheets/SheetRefusal';

const SHORTEST_PIN = 4;

/** Someone else worked on the job last: taking it over is said, with a PIN at the first of a shift. */
export function TakeOverScreen() {
  const run = useRun();
  const [pin, setPin] = useState('');
  const { working, lastAt, lastEntry, plan } = run.state;
  const asksPin = needsPin(run.state, run.person.id, run.now());
  const last = lastEntry === undefined ? undefined : findKept(run.state, lastEntry);
  const cap = capInHand(run.state);
  const unsigned = working ? unsignedWork(run.state, working.by).length : 0;
  const refused = run.refused.findLast(
    ({ entry }) => entry.kind === 'took-over' && entry.by === run.person.id,
  );
  const note = last?.kind === 'took-over' ? dataOf(last, 'took-over').note : undefined;
  async function takeOver() {
    await run.record([
      {
        kind: 'took-over',
        with: [],
        ...(asksPin ? { pin } : {}),
        data: { firstOfShift: asksPin, ...(working ? { from: working.by } : {}) },
      },
    ]);
    setPin('');
  }
  return (
    <FloorFrame
      {...run.cells}
      flash={run.flash}
      quiet={<QuietButton label="Other job" onPress={() => (location.hash = '')} />}
      main={
        <MainAction
          label="Take the job over"
          next={`as ${run.person.name}`}
          why={asksPin && pin.length < SHORTEST_PIN ? 'enter your PIN' : undefined}
          isBusy={run.isBusy}
          onPress={() => void takeOver()}
        />
      }
    >
      <div className="grid items-start gap-x-10 gap-y-5 @4xl/floor-main:grid-cols-[1fr_25rem]">
        <div className="grid gap-5">
          <h1 className="floor-step">Take over from {working?.name ?? 'whoever worked last'}</h1>
          {run.refusal && <SheetRefusal {...run.refusal} />}
          {refused && (
            <Notice tone="stop" title="Your last take-over was refused">
              {refused.reason} {afterRefusal(refused)}
            </Notice>
          )}
          {last && lastAt !== undefined && (
            <p className="floor-then">
              Last, {dayAndTime(lastAt, run.workshop.zone)}: {doneWords(last, plan)}
            </p>
          )}
          {working && unsigned > 0 && (
            <p className="max-w-[62ch] text-xl">
              {unsignedWords(working.name, unsigned)} They do so on any tablet, before a class A hold point
              over it is signed.
            </p>
          )}
          {note !== undefined && <p className="text-xl">“{note}”</p>}
          {cap && (
            <p className="text-xl font-bold">
              {capWords(cap)} stand half tightened. You are asked what was done before anything else.
            </p>
          )}
        </div>
        {asksPin && (
          <PinPad
            label={`PIN of ${run.person.name}`}
            value={pin}
            onChange={setPin}
            hint="first change of this shift"
          />
        )}
      </div>
    </FloorFrame>
  );
}
