import { useState } from 'react';
import { ChoiceRows } from '@/components/ChoiceRows';
import { Keypad } from '@/components/Keypad';
import { QuietButton } from '@/components/QuietButton';
import { lastOf } from '@/domain/job-kept';
import type { PlanCheck, StepOf } from '@/domain/plan';
import type { Draft } from '@/offline/record';
import { answersOf, CheckAnswers, type CheckAnswer, type Exceptions } from '../CheckAnswers';
import { NextAction } from '../NextAction';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';
import { decimalText, isNumber } from '../numbers';
import { distanceIn, likelyAfter, likelyBefore, type DistanceUnit } from '../odometer';
import { useRun } from '../run-context';

type DrivePlan = StepOf<'drive'>;

/** The road test: looks and odometer before, the drive, looks and odometer after. */
export function DriveStep({ step }: { step: DrivePlan }) {
  const { state } = useRun();
  const own = state.steps[step.id];
  const started = lastOf(own, 'drive-started');
  const ended = lastOf(own, 'drive-ended');
  const unit: DistanceUnit = started?.data.unit ?? (state.odometer?.unit === 'mi' ? 'mi' : 'km');
  if (started && ended)
    return <Driven step={step} from={started.data.odometer} to={ended.data.odometer} unit={unit} />;
  if (!started) {
    return (
      <DriveHalf
        key="before"
        step={step}
        checks={step.before}
        unit={unit}
        label="Start the road test"
        likely={likelyBefore(state.odometer?.value)}
        draft={(odometer, checks) => ({
          kind: 'drive-started',
          step: step.id,
          data: { odometer, unit, checks },
        })}
      />
    );
  }
  return (
    <DriveHalf
      key="after"
      step={step}
      checks={step.after}
      unit={unit}
      label="End the road test"
      from={started.data.odometer}
      likely={likelyAfter(step, unit, started.data.odometer)}
      draft={(odometer, checks) => ({ kind: 'drive-ended', step: step.id, data: { odometer, unit, checks } })}
    />
  );
}

interface DriveHalfProps {
  step: DrivePlan;
  checks: PlanCheck[];
  unit: DistanceUnit;
  label: string;
  from?: string;
  /** Readings that are likely here; any other is keyed in. */
  likely: string[];
  draft: (odometer: string, checks: CheckAnswer[]) => Draft;
}

function DriveHalf({ step, checks, unit, label, from, likely, draft }: DriveHalfProps) {
  const [odometer, setOdometer] = useState('');
  const [exceptions, setExceptions] = useState<Exceptions>({});
  const [isOnPad, setOnPad] = useState(true);
  const [isTyping, setTyping] = useState(likely.length === 0);
  const bad = Object.keys(exceptions).length;
  const why = isNumber(odometer)
    ? undefined
    : isTyping
      ? 'key in the odometer'
      : 'touch what the odometer shows';
  return (
    <StepFrame
      step={step}
      side={
        !isOnPad ? null : isTyping ? (
          <Keypad
            label={from === undefined ? 'Odometer before' : 'Odometer after'}
            unit={unit}
            kind="integer"
            value={odometer}
            onChange={setOdometer}
          />
        ) : (
          <div className="grid gap-3">
            <ChoiceRows
              label={`Odometer ${from === undefined ? 'before' : 'after'}, ${unit}: touch what it shows`}
              columns={2}
              choices={likely.map((reading) => ({ value: reading, label: grouped(reading) }))}
              value={odometer}
              onChoose={setOdometer}
            />
            <QuietButton
              shape="wide"
              label="Another reading"
              onPress={() => {
                setOdometer('');
                setTyping(true);
              }}
            />
          </div>
        )
      }
      heading={
        <h1 className="floor-step pb-3">
          {from === undefined ? `${step.title}: before` : `${step.title}: after`}
        </h1>
      }
      quiet={<QuietButton label={isOnPad ? 'Checks' : 'Odometer'} onPress={() => setOnPad(!isOnPad)} />}
      main={
        <RecordAction
          label={label}
          next={
            bad > 0
              ? `${bad} not in order`
              : from === undefined
                ? 'all in order'
                : drivenWords(from, odometer, unit)
          }
          why={why}
          drafts={() => [draft(decimalText(odometer), answersOf(checks, exceptions))]}
        />
      }
    >
      {isOnPad ? (
        <div className="grid max-w-2xl content-start gap-3 text-lg">
          <p>
            To drive:{' '}
            <span className="figure font-semibold">
              {step.distance} {step.distanceUnit}
            </span>
            {from !== undefined && (
              <>
                . It stood at{' '}
                <span className="figure font-semibold">
                  {from} {unit}
                </span>
                .
              </>
            )}
          </p>
          <p className="font-bold">The action says that all of this is in order:</p>
          <ul className="grid gap-1.5">
            {checks.map(({ id, ask }) => (
              <li key={id}>– {ask}</li>
            ))}
          </ul>
          <p className="text-soft">Something is not? Touch “Checks”.</p>
        </div>
      ) : (
        <CheckAnswers label="Checks" checks={checks} exceptions={exceptions} onChange={setExceptions} />
      )}
    </StepFrame>
  );
}

/** "143 212": thousands apart, so that digits are compared in threes. */
function grouped(reading: string): string {
  return reading.replaceAll(/\B(?=(\d{3})+$)/g, '\u00A0');
}

function drivenWords(from: string, to: string, unit: DistanceUnit): string | undefined {
  const driven = Number(to) - Number(from);
  return isNumber(to) && driven >= 0 ? `${driven} ${unit} driven` : undefined;
}

function Driven({ step, from, to, unit }: { step: DrivePlan; from: string; to: string; unit: DistanceUnit }) {
  const driven = Number(to) - Number(from);
  const asked = distanceIn(step, unit);
  return (
    <StepFrame
      step={step}
      heading={<h1 className="floor-step pb-4">{step.title}</h1>}
      main={<NextAction step={step} />}
    >
      <p className="reading">
        <span className="form-label">driven</span>
        <span className="reading-value">
          {driven}
          <span className="reading-unit"> {unit}</span>
        </span>
      </p>
      <p className="pt-6 text-lg">
        Asked: {step.distance} {step.distanceUnit}.{' '}
        {driven < asked - 1 ? 'That is less than asked: it stays in the record as such.' : ''}
      </p>
    </StepFrame>
  );
}
