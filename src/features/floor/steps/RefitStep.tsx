import { useState } from 'react';
import type { StepOf } from '@/domain/plan';
import { knownLots } from '../known-lots';
import { LotEntry } from '../LotEntry';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';
import { useRun } from '../run-context';

/** Something goes on again; where it is a one-use part, the lot of the new one. */
export function RefitStep({ step }: { step: StepOf<'refit'> }) {
  const { state } = useRun();
  const known = step.part === undefined ? [] : knownLots(state, step.part);
  const [lot, setLot] = useState(known.length === 1 ? (known[0] ?? '') : '');
  const removed = state.open.find(({ item }) => item === step.item);
  const count = step.count ?? removed?.count;
  const isTyping = step.part !== undefined && known.length === 0;
  return (
    <StepFrame
      step={step}
      side={isTyping ? null : undefined}
      then={isTyping ? null : undefined}
      main={
        <RecordAction
          label="Refitted"
          why={step.part !== undefined && lot === '' ? 'the lot is needed' : undefined}
          drafts={() => [
            {
              kind: 'refitted',
              step: step.id,
              data: { ...(lot === '' ? {} : { lot }), ...(count === undefined ? {} : { count }) },
            },
          ]}
        />
      }
    >
      <div className="flex flex-wrap items-end gap-x-10 gap-y-4 pb-4">
        {count !== undefined && (
          <div>
            <p className="form-label">pieces</p>
            <p className="figure text-5xl font-semibold">{count}</p>
          </div>
        )}
        {removed?.into !== undefined && (
          <div>
            <p className="form-label">lies in</p>
            <p className="text-3xl font-bold">{removed.into}</p>
          </div>
        )}
      </div>
      {step.part !== undefined && <LotEntry part={step.part} known={known} value={lot} onChange={setLot} />}
    </StepFrame>
  );
}
