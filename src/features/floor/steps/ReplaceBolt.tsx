import { useState } from 'react';
import { LoudAction } from '@/components/LoudAction';
import { Notice } from '@/components/Notice';
import type { StepOf } from '@/domain/plan';
import { knownLots } from '../known-lots';
import { LotEntry } from '../LotEntry';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';
import { useRun } from '../run-context';

interface ReplaceBoltProps {
  step: StepOf<'tighten'>;
  bolt: string;
  /** It has no tightenings left; else it was turned too far. */
  isWorn: boolean;
}

/** A bolt that is scrap comes out and a new one goes in; then the cap starts again. */
export function ReplaceBolt({ step, bolt, isWorn }: ReplaceBoltProps) {
  const { state } = useRun();
  const known = knownLots(state, step.set === undefined ? bolt : 'rod bolts');
  const [lot, setLot] = useState(known.length === 1 ? (known[0] ?? '') : '');
  const reason = isWorn ? 'no tightenings left for the whole programme' : 'turned too far';
  const needsLot = step.set !== undefined;
  return (
    <StepFrame
      step={step}
      isLoud
      heading={
        <LoudAction
          name={bolt.length <= 3 ? bolt : ''}
          words={`replace ${bolt.length <= 3 ? 'this bolt' : bolt}`}
        />
      }
      side={needsLot && known.length === 0 ? null : undefined}
      then="then the cap starts again at its first cycle"
      main={
        <RecordAction
          label={`Replaced ${bolt}`}
          why={needsLot && lot === '' ? 'the lot of the new bolt is needed' : undefined}
          drafts={() => [
            { kind: 'bolt-replaced', step: step.id, data: { bolt, reason, ...(lot === '' ? {} : { lot }) } },
          ]}
        />
      }
    >
      <div className="grid gap-5 pt-6">
        <Notice
          tone="stop"
          title={isWorn ? 'It can’t be tightened often enough again' : 'Turned too far: the bolt is scrap'}
        >
          Put the old bolt where it can’t be used again.
        </Notice>
        {needsLot && <LotEntry part="new bolt" known={known} value={lot} onChange={setLot} />}
      </div>
    </StepFrame>
  );
}
