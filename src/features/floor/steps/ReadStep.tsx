import { useState } from 'react';
import { BladePicker } from '@/components/BladePicker';
import { Keypad } from '@/components/Keypad';
import { QuietButton } from '@/components/QuietButton';
import { Reading } from '@/components/Reading';
import { Verdict } from '@/components/Verdict';
import { lastOf } from '@/domain/job-kept';
import { judgeLimit } from '@/domain/job-limit';
import { isBlocked } from '@/domain/job-deviation';
import type { PlanLimit, StepOf } from '@/domain/plan';
import { bladesAround } from '../feeler-blades';
import { LimitBand, limitWords } from '../LimitBand';
import { NextAction } from '../NextAction';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';
import { decimalText, isNumber } from '../numbers';
import { useRun } from '../run-context';
import { toolUsed } from '../tighten-touch';
import { toolWords } from '../tool-choice';

/** A number with its unit, judged only after it is kept; a gap is told by the blade that passes. */
export function ReadStep({ step }: { step: StepOf<'read'> }) {
  const run = useRun();
  const [value, setValue] = useState('');
  const limit = run.state.plan.limits[step.limit];
  const kept = lastOf(run.state.steps[step.id], 'read');
  const tool = run.state.tools.measuring;
  const blades = limit ? bladesAround(limit) : [];
  const [isTyping, setTyping] = useState(blades.length === 0);
  if (!limit) return <StepFrame step={step} main={<NextAction step={step} />} />;
  if (kept) return <ReadKept step={step} limit={limit} value={kept.data.value} unit={kept.data.unit} />;
  return (
    <StepFrame
      step={step}
      side={
        isTyping ? (
          <Keypad label={limit.title} unit={limit.unit} value={value} onChange={setValue} />
        ) : (
          <BladePicker
            label="Touch the thickest blade that passes"
            blades={blades}
            unit={limit.unit}
            picked={value}
            onPick={setValue}
          />
        )
      }
      quiet={
        blades.length > 0 ? (
          <QuietButton
            label={isTyping ? 'By blade' : 'Other value'}
            onPress={() => {
              setValue('');
              setTyping(!isTyping);
            }}
          />
        ) : undefined
      }
      foot={
        <div className="flex items-center justify-between gap-4">
          <p>{tool ? toolWords(tool) : ''}</p>
          <QuietButton
            shape="wide"
            label={tool ? 'Another tool' : 'Tool in hand'}
            onPress={() => run.openSheet('measuring tool')}
          />
        </div>
      }
      main={
        <RecordAction
          label={isNumber(value) ? `Keep ${value} ${limit.unit}` : 'Keep the reading'}
          why={isNumber(value) ? undefined : isTyping ? 'key in what you read' : 'touch a blade'}
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
      {isTyping ? (
        <LimitBand limit={limit} />
      ) : (
        <div className="grid gap-6">
          <Reading
            label={value === '' ? 'no blade yet' : 'passes, not kept yet'}
            value={value === '' ? '–.––' : value}
            unit={limit.unit}
          />
          <LimitBand limit={limit} />
        </div>
      )}
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
