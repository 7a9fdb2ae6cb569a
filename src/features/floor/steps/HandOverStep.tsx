import type { StepOf } from '@/domain/plan';
import { useRun } from '../run-context';
import { ChecksScreen } from './ChecksScreen';

/** The vehicle goes back to its owner; supervisors hand over. */
export function HandOverStep({ step }: { step: StepOf<'hand-over'> }) {
  const { person } = useRun();
  const may = person.roles.some((role) => role === 'supervisor' || role === 'owner');
  return (
    <ChecksScreen
      step={step}
      checks={step.checks}
      allLabel="Hand over"
      why={may ? undefined : 'a supervisor hands over: change who is working'}
      draft={(checks) => ({ kind: 'handed-over', step: step.id, data: { checks } })}
    />
  );
}
