import { useState } from 'react';
import { HoldButton } from '@/components/HoldButton';
import { Keypad } from '@/components/Keypad';
import { QuietButton } from '@/components/QuietButton';
import { Verdict } from '@/components/Verdict';
import { entryForAction } from '@/domain/job-tightening';
import type { ToolInHand } from '@/domain/job-state';
import type { StepOf } from '@/domain/plan';
import { judgeReading, type StageAction } from '@/domain/tightening';
import type { Draft } from '@/offline/record';
import { amountWords } from '../done-words';
import { decimalText, isNumber } from '../numbers';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';
import { toolUsed } from '../tighten-touch';
import { useRun } from '../run-context';

interface TypedReadingProps {
  step: StepOf<'tighten'>;
  action: StageAction;
  tool: ToolInHand | undefined;
  onClose: () => void;
}

type Outcome = 'done' | 'short and continued' | 'over';

/** A reading of torque or angle keyed in instead of confirmed; short goes on, over condemns the bolt. */
export function TypedReading({ step, action, tool, onClose }: TypedReadingProps) {
  const run = useRun();
  const [value, setValue] = useState('');
  const isAngle = action.spec.kind === 'angle';
  const unit = isAngle ? '°' : 'N·m';
  const judged = isNumber(value) ? judgeReading(action.spec, Number(value)) : undefined;
  const drafts = (outcome: Outcome): Draft[] =>
    typedDrafts(run.state, { step, action, tool }, decimalText(value), outcome);
  const target =
    action.spec.kind === 'torque' || action.spec.kind === 'angle' ? String(action.spec.target) : '';
  return (
    <StepFrame
      step={step}
      side={
        <Keypad
          label={isAngle ? 'Angle turned in this pass' : 'Torque reached'}
          unit={unit}
          value={value}
          onChange={setValue}
        />
      }
      heading={
        <h1 className="floor-step pb-2">
          {action.bolt}: {isAngle ? 'angle' : 'torque'} read
        </h1>
      }
      quiet={<QuietButton label="Confirm only" onPress={onClose} />}
      then={`asked: ${amountWords(target, unit)}`}
      main={
        judged === 'over' ? (
          <HoldButton
            size="main"
            tone="stop"
            label={`Condemn ${action.bolt}`}
            onHeld={() => void run.record(drafts('over'))}
          />
        ) : judged === 'under' ? (
          <RecordAction
            label={`Went on to ${amountWords(target, unit)}`}
            drafts={() => drafts('short and continued')}
          />
        ) : (
          <RecordAction
            label={judged === undefined ? 'Keep the reading' : `Keep ${amountWords(value, unit)}`}
            why={judged === undefined ? 'key in what you read' : undefined}
            drafts={() => drafts('done')}
          />
        )
      }
    >
      <div className="max-w-xl pt-4">
        {judged === 'over' && (
          <Verdict kind="outside" word="Too far">
            The bolt is scrap. Its partner is let off, a new bolt goes in, and the cap starts again at its
            first cycle.
          </Verdict>
        )}
        {judged === 'under' && (
          <Verdict kind="unsure" word="Short">
            Go on to {amountWords(target, unit)} in the same direction, never back. Touch when it is there.
          </Verdict>
        )}
      </div>
    </StepFrame>
  );
}

function typedDrafts(
  state: Parameters<typeof entryForAction>[0],
  { step, action, tool }: Omit<TypedReadingProps, 'onClose'>,
  value: string,
  outcome: Outcome,
): Draft[] {
  const entry = entryForAction(state, step, action);
  if (entry?.kind !== 'tightened') return [];
  const data = {
    ...entry.data,
    how: 'typed' as const,
    value,
    outcome,
    ...(tool ? { tool: toolUsed(tool) } : {}),
  };
  return [{ kind: 'tightened', step: step.id, data }];
}
