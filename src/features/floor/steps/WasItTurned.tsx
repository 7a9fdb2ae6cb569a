import { LoudAction } from '@/components/LoudAction';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import type { StepOf } from '@/domain/plan';
import { useRun } from '../run-context';
import { StepFrame } from '../StepFrame';
import { placeWords, stageAmount, touchDrafts, type TightenTouch } from '../tighten-touch';
import { fitToolInHand, wantedFor } from '../tool-choice';

/** On coming back: what became of the action that stood on the screen. */
export function WasItTurned({ step, touch }: { step: StepOf<'tighten'>; touch: TightenTouch }) {
  const run = useRun();
  const [action] = touch.actions;
  const names = touch.actions.map(({ bolt }) => bolt);
  const spec = action.kind === 'stage' ? action.spec : undefined;
  const amount = action.kind === 'stage' ? stageAmount(run.state, step, action) : undefined;
  const question =
    spec?.kind === 'angle'
      ? 'was it turned?'
      : names.length > 1
        ? 'were they tightened?'
        : 'was it tightened?';
  const hand = spec?.kind === 'angle' ? 'angle' : 'torque';
  const torque = spec?.kind === 'torque' ? spec.target : undefined;
  const tool = fitToolInHand(run.state, run.workshop, hand, wantedFor(hand, step.class, torque), run.now());
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
            step={placeWords(run.state, step, action)}
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
          onPress={() => void run.record(touchDrafts(run.state, step, touch, tool))}
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
