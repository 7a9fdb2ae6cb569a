import { useState } from 'react';
import { Keypad } from '@/components/Keypad';
import { QuietButton } from '@/components/QuietButton';
import { Reading } from '@/components/Reading';
import { Verdict } from '@/components/Verdict';
import { lastOf } from '@/domain/job-kept';
import { judgeLimit } from '@/domain/job-limit';
import { isBlocked } from '@/domain/job-deviation';
import type { PlanLimit, StepOf } from '@/domain/plan';
import { LimitBand, limitWords } from '../LimitBand';
import { NextAction } from '../NextAction';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';
import { decimalText, isNumber } from '../numbers';
import { useRun } from '../run-context';
import { toolUsed } from '../tighten-touch';
import { toolWords } from '../tool-choice';

/** A number with its unit, judged only after it is kept. */
export function ReadStep({ step }: { step: StepOf<'read'> }) {
  const run = useRun();
  const [value, setValue] = useState('');
  const limit = run.state.plan.limits[step.limit];
  const kept = lastOf(run.state.steps[step.id], 'read');
  const tool = run.state.tools.measuring;
  if (!limit) return <StepFrame step={step} main={<NextAction step={step} />} />;
  if (kept) return <ReadKept step={step} limit={limit} value={kept.data.value} unit={kept.data.unit} />;
  return (
    <StepFrame
      step={step}
      side={<Keypad label={limit.title} unit={limit.unit} value={value} onChange={setValue} />}
      quiet={
        <QuietButton
          label={tool ? 'Another tool' : 'Tool in hand'}
          onPress={() => run.openSheet('measuring tool')}
        />
      }
      foot={tool ? <p>{toolWords(tool)}</p> : undefined}
      main={
        <RecordAction
          label={isNumber(value) ? `Keep ${value} ${limit.unit}` : 'Keep the reading'}
          why={isNumber(value) ? undefined : 'key in what you read'}
          drafts={() => [
            {
              kind: 'read',
              step: step.id,
              data: {
                value: decimalText(value),
                unit: limit.unit,
                how: 'typed',
                ...(tool ? { tool: toolUsed(tool) } : {}),
              },
            },
          ]}
        />
      }
    >
      <LimitBand limit={limit} />
    </StepFrame>
  );
}

function ReadKept({
  step,
  limit,
  value,
  unit,
}: {
  step: StepOf<'read'>;
  limit: PlanLimit;
  value: string;
  unit: string;
}) {
  const { state } = useRun();
  const { verdict } = judgeLimit(limit, value, limit.uncertainty ?? '0');
  const isOpen = isBlocked(state, step.id);
  return (
    <StepFrame
      step={step}
      isResult
      heading={<h1 className="floor-step pb-4">{step.title}</h1>}
      foot={
        isOpen ? (
          <p className="font-bold text-outside">
            A deviation is open. The supervisor disposes of it; only that opens the way.
          </p>
        ) : undefined
      }
      main={<NextAction step={step} />}
    >
      <div className="flex flex-wrap items-end gap-x-10 gap-y-6">
        <Reading label={limit.title} value={value} unit={unit} />
        <div className="min-w-64 flex-1">
          <Verdict kind={verdict === 'no limit known' ? 'none' : verdict}>
            {verdict === 'no limit known' ? (limit.missing ?? 'the supervisor judges') : limitWords(limit)}
          </Verdict>
        </div>
      </div>
      <div className="pt-8">
        <LimitBand limit={limit} value={value} />
      </div>
    </StepFrame>
  );
}
