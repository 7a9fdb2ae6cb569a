import type { StepOf } from '@/domain/plan';
import { ChecksScreen } from './ChecksScreen';

/** Takes a parked job up again after its own checks. */
export function ResumeStep({ step }: { step: StepOf<'resume'> }) {
  return (
    <ChecksScreen
      step={step}
      checks={step.checks}
      allLabel="As it was left, resume"
      draft={(checks) => ({ kind: 'resumed', step: step.id, data: { checks } })}
    />
  );
}
