import { LoudAction } from '@/components/LoudAction';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import type { StepOf } from '@/domain/plan';
import { useRun } from '../run-context';
import { StepFrame } from '../StepFrame';
import { toolOf } from '../tighten-tool';
import {
  placeWords,
  pullsOf,
  touchAmounts,
  touchBolts,
  touchDrafts,
  type TightenTouch,
} from '../tighten-touch';

/** On coming back: what became of the action that stood on the screen. */
export function WasItTurned({ step, touch }: { step: StepOf<'tighten'>; touch: TightenTouch }) {
  const run = useRun();
  const [action] = touch.actions;
  const names = touchBolts(touch);
  const spec = action.kind === 'stage' ? action.spec : undefined;
  // Lower passes of one touch are asked about by their last: short of it, the answer is No.
  const amount = touchAmounts(run.state, step, touch).at(-1);
  const question =
    spec?.kind === 'angle'
      ? 'was it turned?'
      : names.length > 1
        ? // Short, because it stands beside two bolts.
          'tightened?'
        : 'was it tightened?';
  const unsure = {
    kind: 'started-again' as const,
    step: step.id,
    data: {
      bolts: step.bolts,
      reason: `not sure whether ${names.join(' and ')} had been taken to ${amount ?? 'its figure'}`,
    },
  };
  return (
    <StepFrame
      step={step}
      isLoud
      heading={
        <div className={names.length > 1 ? '[&_.loud-name]:text-7xl [&_.loud-figure]:text-7xl' : undefined}>
          <LoudAction
            name={names.join(' ')}
            words={question}
            figure={amount?.split(' ')[0]}
            unit={amount?.split(' ')[1]}
            step={placeWords(run.state, step, touch)}
          />
        </div>
      }
      then="You were away, or someone else was here. The record says what was touched, not what was turned."
      main={<MainAction label="Answer first" why="yes, no or not sure" onPress={() => undefined} />}
    >
      <div className="grid gap-3 pt-8 @md/floor-main:grid-cols-3 [&_.quiet-button]:min-h-26 [&_.quiet-button]:text-2xl">
        <QuietButton
          shape="wide"
          sign="tick"
          label="Yes"
          onPress={() =>
            void run.record(touchDrafts(run.state, step, pullsOf(touch), (one) => toolOf(run, step, one)))
          }
        />
        <QuietButton shape="wide" sign="cross" label="No" onPress={run.settleAction} />
        <QuietButton
          shape="wide"
          sign="question"
          label="Not sure"
          onPress={() => void run.record([unsure])}
        />
      </div>
      <p className="pt-4 text-lg text-soft">
        Not sure: {step.bolts.join(' and ')} are let off and start again at the first cycle; one more
        tightening is counted.
      </p>
    </StepFrame>
  );
}
