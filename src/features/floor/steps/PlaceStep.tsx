import type { StepOf } from '@/domain/plan';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';
import { barsWords } from '../bars-words';
import { useRun } from '../run-context';

/** Something temporary goes in; it stays on the open list until it is out again. */
export function PlaceStep({ step }: { step: StepOf<'place'> }) {
  const { state } = useRun();
  const item = state.plan.items.find(({ opens }) => opens === step.id);
  return (
    <StepFrame
      step={step}
      main={<RecordAction label="Placed" drafts={() => [{ kind: 'placed', step: step.id, data: {} }]} />}
    >
      {item && <p className="text-lg">Goes on the open list until it is out again{barsWords(item.bars)}.</p>}
    </StepFrame>
  );
}
