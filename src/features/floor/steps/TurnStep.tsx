import { CrankDial } from '@/components/CrankDial';
import type { StepOf } from '@/domain/plan';
import { RecordAction } from '../RecordAction';
import { StepCautions, StepDetails, StepFrame } from '../StepFrame';
import { useRun } from '../run-context';

const DIAL_PX = 210;

/** Turns the crank by hand, in its running direction only, to where the next rods can be reached. */
export function TurnStep({ step }: { step: StepOf<'turn'> }) {
  const { state } = useRun();
  const { toAngle, fullTurns, rods } = step;
  const by = toAngle === undefined ? undefined : (toAngle - state.crankAngle + 360) % 360;
  return (
    <StepFrame
      step={step}
      heading={
        <div className="grid gap-5">
          <h1 className="floor-step">{step.title}</h1>
          <div className="flex flex-wrap items-center gap-x-10 gap-y-4">
            <CrankDial angle={state.crankAngle} targetAngle={toAngle} size={DIAL_PX} />
            <div className="grid gap-3">
              {toAngle !== undefined && (
                <p>
                  <span className="form-label block">turn to</span>
                  <span className="figure text-7xl font-semibold">{toAngle}°</span>
                </p>
              )}
              {by !== undefined && (
                <p className="text-xl">
                  {by === 0 ? (
                    'It stands there already.'
                  ) : (
                    <>
                      That is <span className="figure font-semibold">{by}°</span> on from here.
                    </>
                  )}
                </p>
              )}
              <p className="text-xl">{state.plan.engine.rotation}, never back</p>
              {rods.length > 0 && <p className="text-xl">Brings rod {rods.join(' and ')} to the bottom.</p>}
            </div>
          </div>
          <StepCautions step={step} />
          <StepDetails step={step} />
        </div>
      }
      main={
        <RecordAction
          label={toAngle === undefined ? turnsLabel(fullTurns ?? 1) : `Turned to ${toAngle}°`}
          drafts={() => [
            {
              kind: 'turned',
              step: step.id,
              data: {
                ...(toAngle === undefined ? {} : { toAngle }),
                ...(fullTurns === undefined ? {} : { fullTurns }),
              },
            },
          ]}
        />
      }
    />
  );
}

function turnsLabel(turns: number): string {
  const words = ['One full turn done', 'Two full turns done', 'Three full turns done'];
  return words[turns - 1] ?? `${turns} full turns done`;
}
