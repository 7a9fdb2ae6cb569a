import type { StepOf } from '@/domain/plan';
import { ChecksScreen } from './ChecksScreen';

/** Looks at a list of things: all in order at one touch, or each by itself. */
export function InspectStep({ step }: { step: StepOf<'inspect'> }) {
  return (
    <ChecksScreen
      step={step}
      checks={step.checks}
      draft={(checks) => ({ kind: 'inspected', step: step.id, data: { checks } })}
    />
  );
}
