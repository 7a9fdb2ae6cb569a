import { useState } from 'react';
import { Keypad } from '@/components/Keypad';
import { Verdict } from '@/components/Verdict';
import { lastOf } from '@/domain/job-kept';
import { isBlocked } from '@/domain/job-deviation';
import type { StepOf } from '@/domain/plan';
import { NextAction } from '../NextAction';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';
import { useRun } from '../run-context';

/** Counts what goes out or comes back; what went out is not shown before the own count is kept. */
export function CountStep({ step }: { step: StepOf<'count'> }) {
  const { state } = useRun();
  const [count, setCount] = useState('');
  const counted = lastOf(state.steps[step.id], 'counted');
  if (counted) return <CountKept step={step} count={counted.data.count} />;
  return (
    <StepFrame
      step={step}
      side={
        <Keypad
          label={`${step.what}, ${step.side === 'out' ? 'going out' : 'come back'}`}
          unit="counted"
          kind="integer"
          maxLength={3}
          value={count}
          onChange={setCount}
        />
      }
      main={
        <RecordAction
          label={count === '' ? 'Keep the count' : `Keep ${count} ${step.what}`}
          why={count === '' ? 'count them' : undefined}
          drafts={() => [{ kind: 'counted', step: step.id, data: { count: Number(count) } }]}
        />
      }
    >
      {step.side === 'in' && (
        <p className="text-xl">Count them yourself: what went out is shown only after your count is kept.</p>
      )}
    </StepFrame>
  );
}

function CountKept({ step, count }: { step: StepOf<'count'>; count: number }) {
  const { state } = useRun();
  const tally = state.tallies[step.tally];
  const isOff = isBlocked(state, step.id);
  return (
    <StepFrame step={step} isResult main={<NextAction step={step} />}>
      <div className="flex flex-wrap items-end gap-10">
        <p>
          <span className="form-label block">{step.what}</span>
          <span className="figure text-8xl font-semibold">{count}</span>
        </p>
        {step.side === 'in' && tally && (
          <Verdict kind={isOff ? 'outside' : 'inside'} word={isOff ? 'Not all of them' : 'All back'}>
            {tally.out} went out.{' '}
            {isOff && 'A deviation is open: look for what is missing, then the supervisor disposes of it.'}
          </Verdict>
        )}
      </div>
    </StepFrame>
  );
}
