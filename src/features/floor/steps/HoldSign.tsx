import { useState } from 'react';
import { Keypad } from '@/components/Keypad';
import { MainAction } from '@/components/MainAction';
import { PinPad } from '@/components/PinPad';
import { QuietButton } from '@/components/QuietButton';
import type { StepOf } from '@/domain/plan';
import type { Coverage } from '@/offline/evidence';
import { NoteField } from '../NoteField';
import { StepFrame } from '../StepFrame';
import { useRun } from '../run-context';
import { HoldEvidence } from './HoldEvidence';
import type { Signer } from './SignerChoice';

type Presence = 'at the vehicle' | 'from photographs';
type Stage = 'look' | 'count' | 'reason' | 'pin' | 'pin again';
const SHORTEST_PIN = 4;

interface HoldSignProps {
  step: StepOf<'hold'>;
  signer: Signer;
  covers: Coverage;
  onBack: () => void;
}

/** The signer's own screens: look, count, say, and the PIN; once with a network, twice without one. */
export function HoldSign({ step, signer, covers, onBack }: HoldSignProps) {
  const run = useRun();
  const [presence, setPresence] = useState<Presence | undefined>();
  const [count, setCount] = useState('');
  const [reason, setReason] = useState('');
  const [pin, setPin] = useState('');
  const [first, setFirst] = useState<string>();
  const [error, setError] = useState<string>();
  const stages: Stage[] = [
    'look',
    ...(step.counts ? (['count'] as const) : []),
    ...(signer.isAuthor ? (['reason'] as const) : []),
    'pin',
  ];
  const [at, setAt] = useState(0);
  const stage = first === undefined ? (stages[at] ?? 'pin') : 'pin again';
  const meaning = meaningWords(step.meaning, count);

  async function sign(final: string) {
    const isSigned = await run.record(
      [
        {
          kind: 'signed',
          step: step.id,
          pin: final,
          with: [],
          data: {
            holdPoint: step.holdPoint,
            name: signer.name,
            roles: signer.roles,
            meaning,
            ...(step.counts ? { count: Number(count) } : {}),
            presence: presence ?? 'at the vehicle',
            covers,
            ...(signer.isAuthor ? { notIndependent: reason.trim() } : {}),
            ...(signer.certificate === undefined ? {} : { certificate: signer.certificate }),
          },
        },
      ],
      { by: signer.id },
    );
    setPin('');
    setFirst(undefined);
    if (isSigned && run.isOnline) await run.syncNow();
  }

  function enterPin() {
    setError(undefined);
    if (run.isOnline) {
      void sign(pin);
    } else if (first === undefined) {
      setFirst(pin);
      setPin('');
    } else if (first === pin) {
      void sign(pin);
    } else {
      setError('The two PINs differ. Enter it twice again.');
      setFirst(undefined);
      setPin('');
    }
  }

  const back = () => {
    setFirst(undefined);
    setPin('');
    if (at === 0) onBack();
    else setAt(at - 1);
  };
  const next = { step, signer, back, onNext: () => setAt(at + 1) };
  if (stage === 'look') return <Look {...next} onPresence={setPresence} />;
  if (stage === 'count') return <OwnCount {...next} count={count} onCount={setCount} />;
  if (stage === 'reason') return <SecondLook {...next} reason={reason} onReason={setReason} />;
  return (
    <StepFrame
      step={step}
      isResult
      then={null}
      side={
        <PinPad
          label={stage === 'pin again' ? `PIN of ${signer.name}, once more` : `PIN of ${signer.name}`}
          value={pin}
          onChange={setPin}
          onEnter={() => pin.length >= SHORTEST_PIN && enterPin()}
          hint={run.isOnline ? 'checked at once' : 'no network: entered twice, checked later'}
          error={error}
        />
      }
      heading={<h1 className="floor-step pb-3">{step.title}</h1>}
      quiet={<QuietButton label="Back" onPress={back} />}
      main={
        <MainAction
          label={stage === 'pin' && !run.isOnline ? 'Once more' : 'Sign'}
          next={`as ${signer.name}`}
          why={pin.length < SHORTEST_PIN ? 'enter your PIN' : undefined}
          isBusy={run.isBusy}
          onPress={enterPin}
        />
      }
    >
      <figure className="max-w-2xl">
        <figcaption className="form-label">You sign</figcaption>
        <blockquote className="pt-1 text-3xl leading-snug">“{meaning}”</blockquote>
        <p className="pt-4 text-lg text-soft">
          {signer.name}, {signer.roles.join(', ')}
          {signer.certificate && `, certificate ${signer.certificate.number}`}; {presence ?? 'at the vehicle'}
          . It covers {covers.count} entries as they stand now; if they change, the hold point opens again.
        </p>
      </figure>
    </StepFrame>
  );
}

interface StageProps {
  step: StepOf<'hold'>;
  signer: Signer;
  back: () => void;
  onNext: () => void;
}

function Look({
  step,
  signer,
  back,
  onNext,
  onPresence,
}: StageProps & { onPresence: (presence: Presence) => void }) {
  const looked = (presence: Presence) => {
    onPresence(presence);
    onNext();
  };
  return (
    <StepFrame
      step={step}
      heading={<h1 className="floor-step pb-3">{signer.name}: look at the vehicle</h1>}
      quiet={<QuietButton label="Back" onPress={back} />}
      main={
        <MainAction
          label="I looked at the vehicle"
          next="it says so in the record"
          onPress={() => looked('at the vehicle')}
        />
      }
    >
      <div className="pb-5">
        {step.presence === 'vehicle' ? (
          <p className="text-xl">This one is signed at the vehicle only.</p>
        ) : (
          <QuietButton
            shape="wide"
            label="I looked at photographs only"
            onPress={() => looked('from photographs')}
          />
        )}
      </div>
      <HoldEvidence step={step} />
    </StepFrame>
  );
}

function OwnCount({
  step,
  signer,
  back,
  onNext,
  count,
  onCount,
}: StageProps & { count: string; onCount: (count: string) => void }) {
  return (
    <StepFrame
      step={step}
      isResult
      then={null}
      side={
        <Keypad
          label={step.counts?.what ?? 'counted'}
          unit="counted"
          kind="integer"
          maxLength={3}
          value={count}
          onChange={onCount}
        />
      }
      heading={<h1 className="floor-step pb-3">{signer.name}: how many did you count?</h1>}
      quiet={<QuietButton label="Back" onPress={back} />}
      main={
        <MainAction
          label={count === '' ? 'Keep my count' : `I counted ${count}`}
          why={count === '' ? 'your own count' : undefined}
          onPress={onNext}
        />
      }
    >
      <p className="max-w-2xl text-xl">
        Look at each head and count. The number is yours: the record is not shown here.
      </p>
    </StepFrame>
  );
}

function SecondLook({
  step,
  signer,
  back,
  onNext,
  reason,
  onReason,
}: StageProps & { reason: string; onReason: (reason: string) => void }) {
  return (
    <StepFrame
      step={step}
      side={null}
      heading={<h1 className="floor-step pb-3">{signer.name}: a second look at your own work</h1>}
      quiet={<QuietButton label="Back" onPress={back} />}
      main={
        <MainAction
          label="Go on"
          why={reason.trim() === '' ? 'say why nobody else signs' : undefined}
          onPress={onNext}
        />
      }
    >
      <p className="pb-4 text-lg">It reads “not independent” on the trail and in the pack.</p>
      <NoteField
        label="Why nobody else signs"
        phrases={['nobody else is in today']}
        value={reason}
        onChange={onReason}
      />
    </StepFrame>
  );
}

/** The meaning in the signer's words, with the count that they keyed in. */
export function meaningWords(meaning: string, count: string): string {
  return meaning.replaceAll('{count}', count);
}
