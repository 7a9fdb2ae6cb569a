import type { StepOf } from '@/domain/plan';
import { ChecksScreen } from './ChecksScreen';

/** Makes the vehicle safe and parks the job. */
export function MakeSafeStep({ step }: { step: StepOf<'make-safe'> }) {
  return (
    <ChecksScreen
      step={step}
      checks={step.checks}
      allLabel="Safe, park the job"
      draft={(checks) => ({ kind: 'parked', step: step.id, data: { checks } })}
    />
  );
}
