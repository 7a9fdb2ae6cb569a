import { useState } from 'react';
import { ChoiceRows } from '@/components/ChoiceRows';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import { addExact, exactOf, exactToNumber, formatDecimal, subtractExact } from '@/domain/decimal';

import { lastOf } from '@/domain/job-kept';
import type { JobState, RodState, ShellFitted } from '@/domain/job-state';
import type { StepOf } from '@/domain/plan';
import { shellLots } from '../known-lots';
import { LotEntry } from '../LotEntry';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';
import { clearanceLimit } from '@/domain/engine-view';
import { useRun } from '../run-context';

type Half = 'upper' | 'lower';

/** Which grade and lot of shell goes into each half of the rod. */
export function ChooseShellsStep({ step }: { step: StepOf<'choose-shells'> }) {
  const { state } = useRun();
  const rod = step.rod === undefined ? undefined : state.rods[step.rod];
  const [shells, setShells] = useState<Record<Half, ShellFitted>>(() => firstChoice(state, rod));
  const [asksLot, setAsksLot] = useState<Half>();
  const isAfterReading =
    rod?.front !== undefined || rod?.rear !== undefined || (rod?.voidReadings.length ?? 0) > 0;
  const predicted = predictedClearance(state, rod, shells);
  const missing = (['upper', 'lower'] as const).find((half) => shells[half].lot === '');
  if (asksLot !== undefined) {
    return (
      <AskLot
        step={step}
        half={asksLot}
        grade={shells[asksLot].grade}
        value={shells[asksLot].lot}
        onLot={(lot) => setShells({ ...shells, [asksLot]: { ...shells[asksLot], lot } })}
        onClose={() => setAsksLot(undefined)}
      />
    );
  }
  return (
    <StepFrame
      step={step}
      main={
        <RecordAction
          label="Shells chosen"
          why={missing === undefined ? undefined : `the lot of the ${missing} shell is needed`}
          drafts={() => [
            {
              kind: 'chose-shells',
              step: step.id,
              data: {
                ...shells,
                ...(predicted === undefined ? {} : { predicted }),
                ...(isAfterReading ? { reason: 'the clearance read with other shells' } : {}),
              },
            },
          ]}
        />
      }
    >
      <div className="grid gap-8 @lg/floor-main:grid-cols-2">
        {(['upper', 'lower'] as const).map((half) => (
          <div key={half} className="grid content-start gap-3">
            <ChoiceRows
              label={`${half === 'upper' ? 'Upper' : 'Lower'} shell, ${step.rod ?? ''}${half === 'upper' ? 'U' : 'L'}`}
              choices={state.plan.engine.shells.grades.map(({ grade, wall }) => ({
                value: grade,
                label: grade,
                note: wallWords(wall),
              }))}
              value={shells[half].grade}
              onChoose={(grade) => setShells({ ...shells, [half]: { grade, lot: lotFor(state, grade) } })}
            />
            <QuietButton
              shape="wide"
              label={shells[half].lot === '' ? `Lot of the ${half} shell` : `Lot ${shells[half].lot}, change`}
              onPress={() => setAsksLot(half)}
            />
          </div>
        ))}
      </div>
      {predicted !== undefined && (
        <p className="pt-4 text-lg">
          Predicted from the last reading: <span className="figure font-semibold">{predicted} mm</span>. A
          prediction is not a measurement: it is gauged again.
        </p>
      )}
    </StepFrame>
  );
}

interface AskLotProps {
  step: StepOf<'choose-shells'>;
  half: Half;
  grade: string;
  value: string;
  onLot: (lot: string) => void;
  onClose: () => void;
}

function AskLot({ step, half, grade, value, onLot, onClose }: AskLotProps) {
  const { state } = useRun();
  return (
    <StepFrame
      step={step}
      side={null}
      heading={<h1 className="floor-step pb-3">Lot of the {half} shell</h1>}
      quiet={<QuietButton label="Back" onPress={onClose} />}
      main={
        <MainAction
          label={value === '' ? 'Use this lot' : `Use lot ${value}`}
          why={value === '' ? 'the lot is needed' : undefined}
          onPress={onClose}
        />
      }
    >
      <LotEntry part={`${half} shell`} known={shellLots(state, grade)} value={value} onChange={onLot} />
    </StepFrame>
  );
}

/** What is in the rod now, else the standard grade. */
function firstChoice(state: JobState, rod: RodState | undefined): Record<Half, ShellFitted> {
  const { standard } = state.plan.engine.shells;
  const fresh: ShellFitted = { grade: standard, lot: lotFor(state, standard) };
  return { upper: rod?.upper ?? fresh, lower: rod?.lower ?? fresh };
}

/** The lot last used for a grade on this job, else the only one of the kit check. */
function lotFor(state: JobState, grade: string): string {
  const used = state.plan.steps
    .flatMap((step) =>
      step.kind === 'choose-shells' ? (lastOf(state.steps[step.id], 'chose-shells') ?? []) : [],
    )
    .flatMap(({ data }) => [data.upper, data.lower])
    .findLast((shell) => shell.grade === grade);
  const known = shellLots(state, grade);
  return used?.lot ?? (known.length === 1 ? (known[0] ?? '') : '');
}

/** The last reading less what the other walls take; nothing where nothing was read or nothing changes. */
function predictedClearance(
  state: JobState,
  rod: RodState | undefined,
  shells: Record<Half, ShellFitted>,
): string | undefined {
  const reading = rod?.rear ?? rod?.front ?? rod?.voidReadings.at(-1);
  if (!reading || !rod?.upper || !rod.lower || !clearanceLimit(state)) return undefined;
  const wall = ({ grade }: ShellFitted) =>
    exactOf(state.plan.engine.shells.grades.find((g) => g.grade === grade)?.wall ?? '0');
  const change = subtractExact(
    addExact(wall(shells.upper), wall(shells.lower)),
    addExact(wall(rod.upper), wall(rod.lower)),
  );
  const places = (reading.clearance.split('.')[1] ?? '').length;
  const predicted = exactToNumber(subtractExact(exactOf(reading.clearance), change));
  return predicted > 0 ? formatDecimal(predicted, places) : undefined;
}

function wallWords(wall: string): string {
  if (Number(wall) === 0) return 'standard wall';
  return Number(wall) > 0 ? `wall +${wall} mm, less clearance` : `wall ${wall} mm, more clearance`;
}
