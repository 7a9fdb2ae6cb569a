/* Which tool an action of a tightening programme is recorded with. */
import type { ToolInHand } from '@/domain/job-state';
import type { StepOf } from '@/domain/plan';
import type { TighteningAction } from '@/domain/tightening';
import type { ToolUse } from '@/domain/tool';
import type { Run } from './run-context';
import { fitToolInHand, wantedFor, type Hand } from './tool-choice';

/** Which kind of tool an action needs; none for a release or a mark. */
export function handOf(action: TighteningAction): Hand | undefined {
  if (action.kind !== 'stage') return undefined;
  if (action.spec.kind === 'angle') return 'angle';
  return action.spec.kind === 'torque' ? 'torque' : undefined;
}

/** What an action asks of its tool. */
export function wantedOf(step: StepOf<'tighten'>, action: TighteningAction, hand: Hand): ToolUse {
  const torque = action.kind === 'stage' && action.spec.kind === 'torque' ? action.spec.target : undefined;
  return wantedFor(hand, step.class, torque);
}

/** The tool that an action is recorded with, if one that fits is known. */
export function toolOf(
  { state, workshop, now }: Run,
  step: StepOf<'tighten'>,
  action: TighteningAction,
): ToolInHand | undefined {
  const hand = handOf(action);
  return hand && fitToolInHand(state, workshop, hand, wantedOf(step, action, hand), now());
}
