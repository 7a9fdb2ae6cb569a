import { useState } from 'react';
import { ChoiceRows } from '@/components/ChoiceRows';
import { Keypad } from '@/components/Keypad';
import { QuietButton } from '@/components/QuietButton';
import type { StepOf } from '@/domain/plan';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';
import { barsWords } from '../bars-words';
import { useRun } from '../run-context';

const PLACES = ['rack 1', 'rack 2', 'tray 1', 'tray 2', 'trolley', 'bin, to be counted'];

/** Something comes off: how many, and where it lies until it goes on again. */
export function RemoveStep({ step }: { step: StepOf<'remove'> }) {
  const { state } = useRun();
  const [count, setCount] = useState(step.count === undefined ? '' : String(step.count));
  const [into, setInto] = useState(step.into);
  const [asks, setAsks] = useState<'count' | 'place'>();
  const item = state.plan.items.find(({ opens }) => opens === step.id);
  const places = [...new Set([...(step.into === undefined ? [] : [step.into]), ...PLACES])];
  return (
    <StepFrame
      step={step}
      quiet={
        <QuietButton
          label={asks === 'place' ? 'Keep place' : 'Other place'}
          onPress={() => setAsks(asks === 'place' ? undefined : 'place')}
        />
      }
      main={
        <RecordAction
          label="Off"
          why={step.count !== undefined && count === '' ? 'how many came off?' : undefined}
          drafts={() => [{ kind: 'removed', step: step.id, data: removedData(count, into) }]}
        />
      }
    >
      {asks === 'count' ? (
        <Keypad
          label="How many came off"
          unit="pieces"
          kind="integer"
          maxLength={3}
          value={count}
          onChange={setCount}
        />
      ) : asks === 'place' ? (
        <ChoiceRows
          label="Where it lies"
          columns={2}
          choices={places.map((place) => ({ value: place, label: place }))}
          value={into}
          onChoose={setInto}
        />
      ) : (
        <RemovalFacts
          count={count}
          into={into}
          isOneUse={step.oneUse === true}
          onCount={step.count === undefined ? undefined : () => setAsks('count')}
        />
      )}
      {item && asks === undefined && (
        <p className="pt-4 text-lg text-soft">On the open list from now on{barsWords(item.bars)}.</p>
      )}
    </StepFrame>
  );
}

function removedData(count: string, into: string | undefined) {
  return { ...(count === '' ? {} : { count: Number(count) }), ...(into === undefined ? {} : { into }) };
}

interface RemovalFactsProps {
  count: string;
  into: string | undefined;
  isOneUse: boolean;
  onCount: (() => void) | undefined;
}

function RemovalFacts({ count, into, isOneUse, onCount }: RemovalFactsProps) {
  return (
    <div className="flex flex-wrap items-end gap-x-10 gap-y-4">
      {onCount && (
        <div>
          <p className="form-label">pieces</p>
          <p className="figure text-6xl font-semibold">{count === '' ? '–' : count}</p>
        </div>
      )}
      {into !== undefined && (
        <div>
          <p className="form-label">goes to</p>
          <p className="text-3xl font-bold">{into}</p>
        </div>
      )}
      {isOneUse && <p className="text-xl font-bold">One use only: it is not fitted again.</p>}
      {onCount && <QuietButton shape="wide" label="Another count" onPress={onCount} />}
    </div>
  );
}
