import type { StepOf } from '@/domain/plan';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';

/** Something to do that needs no figure: one touch when it is done. */
export function DoStep({ step }: { step: StepOf<'do'> }) {
  return (
    <StepFrame
      step={step}
      main={<RecordAction label="Done" drafts={() => [{ kind: 'done', step: step.id, data: {} }]} />}
    />
  );
}
