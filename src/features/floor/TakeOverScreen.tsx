import { useState } from 'react';
import { FloorFrame } from '@/components/FloorFrame';
import { HoldButton } from '@/components/HoldButton';
import { MainAction } from '@/components/MainAction';
import { Notice } from '@/components/Notice';
import { PinPad } from '@/components/PinPad';
import { QuietButton } from '@/components/QuietButton';
import { findKept } from '@/domain/job';
import { unsignedWords, unsignedWork } from '@/domain/job-work';
import { dayAndTime } from '@/domain/time-words';
import type { JobTablet } from '@/offline/database';
import { capInHand, capWords } from './cap-in-hand';
import { dataOf, doneWords } from './done-words';
import { afterRefusal } from './refused-words';
import { useRun } from './run-context';
import { isElsewhere, needsPin } from './shift';
import { SheetRefusal } from './sheets/SheetRefusal';

const SHORTEST_PIN = 4;

interface TakeOverScreenProps {
  /** This tablet. */
  device?: string | undefined;
  /** The tablets that recorded in the job, as far as this one has heard. */
  tablets?: readonly JobTablet[] | undefined;
}

/**
 * Someone else worked on the job last: taking it over is said, with a PIN at the first of a shift. From another
 * tablet it is held down, because two tablets on one job can do the same work twice.
 */
export function TakeOverScreen({ device, tablets = [] }: TakeOverScreenProps) {
  const run = useRun();
  const [pin, setPin] = useState('');
  const { working, lastAt, lastEntry, plan } = run.state;
  const last = lastEntry === undefined ? undefined : findKept(run.state, lastEntry);
  const cap = capInHand(run.state);
  const unsigned = working ? unsignedWork(run.state, working.by).length : 0;
  const refused = run.refused.findLast(
    ({ entry }) => entry.kind === 'took-over' && entry.by === run.person.id,
  );
  const note = last?.kind === 'took-over' ? dataOf(last, 'took-over').note : undefined;
  const fromElsewhere = isElsewhere(run.state, device);
  const isOwn = working?.by === run.person.id;
  // Nobody else comes to work where one goes from tablet to tablet.
  const asksPin = !isOwn && needsPin(run.state, run.person.id, run.now());
  const why = asksPin && pin.length < SHORTEST_PIN ? 'enter your PIN' : undefined;
  async function takeOver() {
    await run.record([
      {
        kind: 'took-over',
        with: [],
        ...(asksPin ? { pin } : {}),
        data: { firstOfShift: asksPin, ...(working && !isOwn ? { from: working.by } : {}) },
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
        fromElsewhere ? (
          <HoldButton
            size="main"
            label={isOwn ? 'Go on here' : 'Take the job over'}
            hint="from another tablet: press and hold"
            why={why ?? (run.isBusy ? 'being recorded' : undefined)}
            onHeld={() => void takeOver()}
          />
        ) : (
          <MainAction
            label="Take the job over"
            next={`as ${run.person.name}`}
            why={why}
            isBusy={run.isBusy}
            onPress={() => void takeOver()}
          />
        )
      }
    >
      <div className="grid items-start gap-x-10 gap-y-5 @4xl/floor-main:grid-cols-[1fr_25rem]">
        <div className="grid gap-5">
          <h1 className="floor-step">
            {isOwn
              ? 'You worked on it at another tablet'
              : `Take over from ${working?.name ?? 'whoever worked last'}`}
          </h1>
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
          {working && !isOwn && unsigned > 0 && (
            <p className="max-w-[62ch] text-xl">
              {unsignedWords(working.name, unsigned)} They do so on any tablet, before a class A hold point
              over it is signed.
            </p>
          )}
          {note !== undefined && <p className="text-xl">“{note}”</p>}
          {fromElsewhere && (
            <OtherTablet tablet={tablets.find(({ id }) => id === working?.device)} zone={run.workshop.zone} />
          )}
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

/** Which tablet the job was worked on last, and when that was last heard. */
function OtherTablet({ tablet, zone }: { tablet: JobTablet | undefined; zone: string }) {
  const name = tablet?.name ?? 'The other tablet';
  const heard = tablet?.lastHeardAt ?? tablet?.lastRecordedAt;
  return (
    <Notice
      tone="unsure"
      title={
        heard === undefined
          ? 'When the other tablet was last heard is not known here'
          : `${name} was last heard ${dayAndTime(heard, zone)}`
      }
    >
      What was done with it after that is not here: on two tablets the same bolt is soon turned twice. Look
      where it lies and what its screen says. Go on here only when nobody works with it any more.
    </Notice>
  );
}
