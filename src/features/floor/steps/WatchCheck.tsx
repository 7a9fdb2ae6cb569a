import { useState } from 'react';
import { Keypad } from '@/components/Keypad';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import { clockText } from '@/components/TimerFace';
import { judgeLimit } from '@/domain/job-limit';
import type { JobState } from '@/domain/job-state';
import type { StepOf } from '@/domain/plan';
import { LimitBand } from '../LimitBand';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';
import { decimalText, isNumber } from '../numbers';
import { useRun } from '../run-context';

export interface WatchCheckProps {
  step: StepOf<'watch'>;
  check: StepOf<'watch'>['checks'][number];
  /** Seconds of the watch that are left. */
  left: number;
}

/** One look of the watch: a question with two answers, or a figure against its limit. */
export function WatchCheck({ step, check, left }: WatchCheckProps) {
  const run = useRun();
  const limit = check.limit === undefined ? undefined : run.state.plan.limits[check.limit];
  if (limit) return <WatchReading step={step} check={check} left={left} />;
  const answer = (ok: boolean) =>
    void run.record([{ kind: 'watch-checked', step: step.id, data: { check: check.id, ok } }]);
  return (
    <StepFrame
      step={step}
      heading={<CheckHeading words={checkWords(run.state, check)} left={left} />}
      quiet={<QuietButton label="Not in order" sign="cross" onPress={() => answer(false)} />}
      main={
        <MainAction
          label="In order"
          next="touch, pedal or space"
          isBusy={run.isBusy}
          onPress={() => answer(true)}
        />
      }
    >
      {check.stop === true && <StopWords />}
    </StepFrame>
  );
}

function WatchReading({ step, check, left }: WatchCheckProps) {
  const { state } = useRun();
  const [value, setValue] = useState('');
  const limit = check.limit === undefined ? undefined : state.plan.limits[check.limit];
  if (!limit) return null;
  const verdict = isNumber(value) ? judgeLimit(limit, decimalText(value), '0').verdict : undefined;
  return (
    <StepFrame
      step={step}
      side={<Keypad label={limit.title} unit={limit.unit} value={value} onChange={setValue} />}
      heading={<CheckHeading words={limit.title} left={left} />}
      main={
        <RecordAction
          label={isNumber(value) ? `Keep ${value} ${limit.unit}` : 'Keep the reading'}
          why={isNumber(value) ? undefined : 'key in what you read'}
          drafts={() => [
            {
              kind: 'watch-checked',
              step: step.id,
              data: {
                check: check.id,
                ok: verdict === 'inside' || verdict === 'no limit known',
                value: decimalText(value),
                unit: limit.unit,
              },
            },
          ]}
        />
      }
    >
      <div className="grid content-start gap-4">
        <LimitBand limit={limit} />
        {check.stop === true && <StopWords />}
      </div>
    </StepFrame>
  );
}

function CheckHeading({ words, left }: { words: string; left: number }) {
  return (
    <div className="flex flex-wrap items-baseline justify-between gap-4 pb-4">
      <h1 className="floor-step">{words}</h1>
      <p className="figure text-2xl">{clockText(left)} left</p>
    </div>
  );
}

function StopWords() {
  return <p className="text-xl font-bold text-outside">If not, stop the engine at once.</p>;
}

/** What a look of a watch is about. */
export function checkWords(state: JobState, check: WatchCheckProps['check']): string {
  return (
    check.ask ?? (check.limit === undefined ? undefined : state.plan.limits[check.limit]?.title) ?? check.id
  );
}
