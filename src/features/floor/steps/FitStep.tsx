import { useState } from 'react';
import type { StepOf } from '@/domain/plan';
import { knownLots } from '../known-lots';
import { LotEntry } from '../LotEntry';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';
import { useRun } from '../run-context';

/** A part with its number of pieces and, where it is asked, its lot. */
export function FitStep({ step }: { step: StepOf<'fit'> }) {
  const { state } = useRun();
  const known = knownLots(state, step.part);
  const [lot, setLot] = useState(known.length === 1 ? (known[0] ?? '') : '');
  const isTyping = step.lot && known.length === 0;
  return (
    <StepFrame
      step={step}
      side={isTyping ? null : undefined}
      then={isTyping ? null : undefined}
      main={
        <RecordAction
          label="Confirmed"
          why={step.lot && lot === '' ? 'the lot is needed' : undefined}
          drafts={() => [
            { kind: 'fitted', step: step.id, data: { count: step.count, ...(lot === '' ? {} : { lot }) } },
          ]}
        />
      }
    >
      {(step.count > 1 || !isTyping) && (
        <p className="pb-3 text-2xl">
          <span className="figure text-4xl font-semibold">{step.count}</span> × {step.part}
        </p>
      )}
      {step.lot && <LotEntry part={step.part} known={known} value={lot} onChange={setLot} />}
    </StepFrame>
  );
}
