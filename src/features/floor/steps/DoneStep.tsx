import { Sign } from '@/components/Sign';
import type { PlanStep } from '@/domain/plan';
import { QuietButton } from '@/components/QuietButton';
import { DONE_PAST, donePast } from '@/domain/job-evidence';
import { activeEntries } from '@/domain/job-kept';
import { doneWords } from '../done-words';
import { NextAction } from '../NextAction';
import { StepFrame } from '../StepFrame';
import { useRun } from '../run-context';
import { dayAndTime } from '@/domain/time-words';

/** A step that is done or set aside, as it was recorded. */
export function DoneStep({ step }: { step: PlanStep }) {
  const { state, workshop, openSheet } = useRun();
  const past = donePast(state, step.id);
  const own = state.steps[step.id];
  const status = own?.status ?? 'open';
  return (
    <StepFrame
      step={step}
      main={<NextAction step={step} />}
      quiet={<QuietButton label="Correct" onPress={() => openSheet('correct')} />}
    >
      <p className="flex items-center gap-3 pb-3 text-2xl font-bold">
        <Sign name={status === 'done' ? 'tick' : 'minus'} />
        {status === 'done' ? 'Done' : status === 'not applicable' ? 'Not applicable' : status}
      </p>
      {past && (
        <p className="flex items-start gap-3 pb-3 text-lg font-bold">
          <Sign name="dot" />
          <span>
            {DONE_PAST}: {past.holdPoint}
          </span>
        </p>
      )}
      <ol className="grid gap-2">
        {activeEntries(own).map((kept) => (
          <li key={kept.id} className="border-b border-rule pb-2 text-lg">
            <span className="figure">{dayAndTime(kept.at, workshop.zone)}</span> {kept.name}:{' '}
            {doneWords(kept, state.plan)}
            {kept.correctedBy !== undefined && ', as corrected'}
          </li>
        ))}
      </ol>
    </StepFrame>
  );
}
