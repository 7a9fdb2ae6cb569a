import { ClearanceScale } from '@/components/ClearanceScale';
import { BandPicker } from '@/components/BandPicker';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import { Reading } from '@/components/Reading';
import { Verdict } from '@/components/Verdict';
import { correctionOver } from '@/domain/job-countersign';
import { wayOut } from '@/domain/job-order';
import { predictionWords } from '@/domain/job-prediction';
import type { ClearanceReading, JobState, RodState } from '@/domain/job-state';
import { rodsOf, type PlanLimit, type StepOf } from '@/domain/plan';
import { dataOf } from '../done-words';
import { NextAction } from '../NextAction';
import { StepFrame } from '../StepFrame';
import { limitOnScale, onScale, taperWords, targetWords, type End } from '../gauge-reading';
import { useRun } from '../run-context';
import { clockTime } from '@/domain/time-words';

interface GaugeKeptProps {
  step: StepOf<'gauge'>;
  rod: RodState;
  kept: ClearanceReading;
  onRear: () => void;
  onReadAgain: (end: End) => void;
  /** The finer way, by micrometer and bore gauge. */
  onByParts: (end: End) => void;
}

/** A reading that is kept, its verdict, and all rods together on one scale. */
export function GaugeKept({ step, rod, kept, onRear, onReadAgain, onByParts }: GaugeKeptProps) {
  const { state, workshop } = useRun();
  const limit = state.plan.limits[step.limit];
  const deviations = state.deviations.filter((d) => d.step === step.id && !d.disposed && d.blocks);
  if (!limit) return <StepFrame step={step} main={<NextAction step={step} />} />;
  return (
    <StepFrame
      step={step}
      side={
        isByParts(state, step, kept) ? undefined : (
          <PickedBand state={state} clearance={kept.clearance} end={kept.end} rod={step.rod} />
        )
      }
      heading={
        <div className="flex flex-wrap items-end justify-between gap-x-8 gap-y-4 pb-4">
          <Reading label={`Rod ${rod.rod}, ${kept.end}`} value={kept.clearance} unit={limit.unit} />
          <div className="min-w-64 flex-1">
            <Verdict kind={kept.verdict === 'no limit known' ? 'none' : kept.verdict}>
              <VerdictWords rod={rod} kept={kept} limit={limit} />
            </Verdict>
            {kept.verdict === 'unsure' && deviations.length === 0 && (
              <div className="pt-3">
                <QuietButton
                  shape="wide"
                  label={`Measure the ${kept.end} by its parts`}
                  onPress={() => onByParts(kept.end)}
                />
              </div>
            )}
          </div>
        </div>
      }
      isResult
      then={null}
      foot={
        deviations.length > 0 ? (
          <p className="font-bold text-outside">
            {deviations.map(({ words }) => words).join('. ')}.{' '}
            {deviations.every(({ id }) => correctionOver(state, id))
              ? deviations.slice(0, 1).map((one) => wayOut(state, one))
              : 'The supervisor disposes of it; only that opens the way.'}
          </p>
        ) : undefined
      }
      quiet={<QuietButton label="Read again" onPress={() => onReadAgain(kept.end)} />}
      main={
        <AfterReading
          step={step}
          rod={rod}
          kept={kept}
          isBarred={deviations.length > 0}
          note={`kept ${clockTime(kept.at, workshop.zone)}`}
          onRear={onRear}
          onByParts={onByParts}
        />
      }
    >
      <AllRods state={state} limit={limit} rod={step.rod} />
    </StepFrame>
  );
}

function isByParts(state: JobState, step: StepOf<'gauge'>, { entry }: ClearanceReading): boolean {
  const kept = state.steps[step.id]?.entries.find(({ id }) => id === entry);
  return kept !== undefined && dataOf(kept, 'gauged').by === 'parts';
}

function VerdictWords({ rod, kept, limit }: { rod: RodState; kept: ClearanceReading; limit: PlanLimit }) {
  const other = kept.end === 'front' ? rod.rear : rod.front;
  const taper = taperWords(rod, limit.unit);
  const prediction = predictionWords(rod);
  return (
    <>
      <p>{verdictText(kept, limit)}</p>
      {other && (
        <p>
          {other.end} <span className="figure">{other.clearance}</span>, {other.verdict}
        </p>
      )}
      {taper !== undefined && <p>{taper}</p>}
      {prediction !== undefined && <p>{prediction}</p>}
    </>
  );
}

function verdictText(kept: ClearanceReading, limit: PlanLimit): string {
  switch (kept.verdict) {
    case 'inside':
      return targetWords(kept, limit);
    case 'unsure':
      return `nearer to a limit than ± ${kept.uncertainty} ${limit.unit} can tell: a finer way tells`;
    case 'outside':
      return `allowed is ${limit.low ?? '–'} to ${limit.high ?? '–'} ${limit.unit}`;
    case 'no limit known':
      return limit.missing ?? 'the supervisor judges';
  }
}

interface AfterReadingProps extends Omit<GaugeKeptProps, 'rod' | 'onReadAgain'> {
  rod: RodState;
  isBarred: boolean;
  note: string;
}

function AfterReading({ step, rod, kept, isBarred, note, onRear, onByParts }: AfterReadingProps) {
  const run = useRun();
  if (!rod.rear || !rod.front)
    return <MainAction label="Next: rear" next={note} isBusy={run.isBusy} onPress={onRear} />;
  const unsure = ([rod.front, rod.rear] as const).find(({ verdict }) => verdict === 'unsure');
  if (isBarred)
    return <MainAction label="See the deviation" next={note} onPress={() => run.openSheet('job')} />;
  if (unsure && run.state.steps[step.id]?.status !== 'done') {
    return (
      <MainAction
        label={`By its parts: ${unsure.end}`}
        next={kept.end === unsure.end ? note : undefined}
        isBusy={run.isBusy}
        onPress={() => onByParts(unsure.end)}
      />
    );
  }
  return <NextAction step={step} note={note} />;
}

function AllRods({
  state,
  limit,
  rod: inHand,
}: {
  state: JobState;
  limit: PlanLimit;
  rod: number | undefined;
}) {
  return (
    <ClearanceScale
      unit={limit.unit}
      low={limitOnScale(limit.low)}
      high={limitOnScale(limit.high)}
      target={limitOnScale(limit.target)}
      rods={rodsOf(state.plan).map((rod) => ({
        rod: String(rod),
        front: onScale(state.rods[rod]?.front),
        rear: onScale(state.rods[rod]?.rear),
        isInHand: rod === inHand,
        words: state.rods[rod]?.voidReadings.length ? 'void' : 'waiting',
      }))}
    />
  );
}

/** The card as it was touched; it can't be touched any more. */
function PickedBand({
  state,
  clearance,
  end,
  rod,
}: {
  state: JobState;
  clearance: string;
  end: End;
  rod: number | undefined;
}) {
  const { bands } = state.plan.engine.card;
  const index = bands.findIndex((band) => band.clearance === clearance);
  return (
    <BandPicker
      label={`Rod ${rod ?? ''}, ${end}: kept`}
      isDisabled
      bands={bands.map((band, i) => ({
        id: String(i),
        widthMm: Number(band.width),
        clearance: band.clearance,
      }))}
      picked={index < 0 ? undefined : String(index)}
      onPick={() => undefined}
    />
  );
}
