import { useState } from 'react';
import { MainAction } from '@/components/MainAction';
import { Notice } from '@/components/Notice';
import { SignatureStamp } from '@/components/SignatureStamp';
import { findSignature, isPassed } from '@/domain/job-evidence';
import { unsignedUnder } from '@/domain/job-signing-rules';
import { myWorkWords, unsignedWords, unsignedWork } from '@/domain/job-work';
import type { Signature } from '@/domain/job-state';
import type { StepOf } from '@/domain/plan';
import type { Coverage } from '@/offline/evidence';
import { NextAction } from '../NextAction';
import { StepFrame } from '../StepFrame';
import { useRun } from '../run-context';
import { dayAndTime } from '@/domain/time-words';
import { certificateWords } from '@/domain/signature-view';
import { HoldEvidence } from './HoldEvidence';
import { HoldSign } from './HoldSign';
import { SignerChoice, type Signer } from './SignerChoice';

type HoldPlan = StepOf<'hold'>;

/** A hold point: the tablet is handed to a signer, who looks at the evidence and signs with a PIN of their own. */
export function HoldStep({ step }: { step: HoldPlan }) {
  const run = useRun();
  const [stage, setStage] = useState<'evidence' | 'signer' | 'sign'>('evidence');
  const [signer, setSigner] = useState<Signer>();
  const [covers, setCovers] = useState<Coverage>();
  const signature = findSignature(run.state, step.id);
  if (signature) return <Signed step={step} signature={signature} />;
  if (stage === 'sign' && signer && covers) {
    return <HoldSign step={step} signer={signer} covers={covers} onBack={() => setStage('signer')} />;
  }
  if (stage === 'signer') {
    return (
      <SignerChoice
        step={step}
        onBack={() => setStage('evidence')}
        onSigner={(chosen) => {
          setSigner(chosen);
          setStage('sign');
        }}
      />
    );
  }
  const own = unsignedWork(run.state, run.person.id).length;
  const [other] = unsignedUnder(run.state, step, run.workshop).filter(({ by }) => by !== run.person.id);
  /** What is on the screen is what is signed: the coverage is taken as the tablet is handed over. */
  async function handOver() {
    if (own > 0) {
      const covered = await run.ownWork();
      if (!(await run.record([{ kind: 'work-signed', with: [], data: { covers: covered } }]))) return;
    }
    setCovers(await run.coverage(step.id));
    setStage('signer');
  }
  return (
    <StepFrame
      step={step}
      heading={
        <div className="pb-3">
          <h1 className="floor-step">{step.title}</h1>
          {step.why !== undefined && <p className="pt-1 text-lg text-soft">{step.why}</p>}
        </div>
      }
      main={
        <MainAction
          label="Hand it to the signer"
          next={own > 0 ? lowerFirst(myWorkWords(own)) : undefined}
          why={other && `${other.name} signs for their work first`}
          isBusy={run.isBusy}
          onPress={() => void handOver()}
        />
      }
    >
      <RefusedSignature step={step} />
      {other && (
        <div className="pb-4">
          <Notice tone="unsure" title={unsignedWords(other.name, other.entries.length)}>
            A class A hold point is not signed over work that its author has not signed for. Touch the name at
            the top: {other.name} takes over and signs; then change back.
          </Notice>
        </div>
      )}
      <HoldEvidence step={step} />
    </StepFrame>
  );
}

function lowerFirst(words: string): string {
  return words.charAt(0).toLowerCase() + words.slice(1);
}

/** A signature that the server did not take: it is kept, and the reason is said. */
function RefusedSignature({ step }: { step: HoldPlan }) {
  const { refused } = useRun();
  const last = refused.findLast(({ entry }) => entry.kind === 'signed' && entry.step === step.id);
  if (!last) return null;
  return (
    <div className="pb-4">
      <Notice tone="stop" title={`The signature of ${last.entry.author.name} was refused`}>
        {last.reason} It is kept on this tablet. Sign again.
      </Notice>
    </div>
  );
}

function Signed({ step, signature }: { step: HoldPlan; signature: Signature }) {
  const run = useRun();
  const isChecked = signature.checkedAt !== undefined;
  return (
    <StepFrame
      step={step}
      heading={<h1 className="floor-step pb-5">{step.title}</h1>}
      main={
        isPassed(run.state, step) ? (
          <NextAction step={step} note={isChecked ? 'PIN checked' : 'to be checked'} />
        ) : (
          <MainAction
            label="Send it now"
            next={run.isOnline ? 'the PIN is checked there' : 'no network'}
            onPress={() => void run.syncNow()}
          />
        )
      }
    >
      <SignatureStamp
        state={isChecked ? 'signed' : 'to be checked'}
        name={signature.name}
        time={dayAndTime(signature.at, run.workshop.zone)}
        words={signature.meaning}
        covers={`${signature.covered} entries`}
        isNotIndependent={signature.notIndependent !== undefined}
        certificate={certificateWords(signature)}
      />
      {!isChecked && (
        <div className="pt-5">
          <Notice tone="unsure" title="Signed, to be checked">
            {step.offline === 'proceed'
              ? 'The PIN is checked as soon as the tablet has a network. Work goes on at risk until then, and the vehicle can’t be handed over.'
              : 'The PIN is checked as soon as the tablet has a network. Work past this hold point waits until then. Bring the tablet to the network.'}
          </Notice>
        </div>
      )}
    </StepFrame>
  );
}
