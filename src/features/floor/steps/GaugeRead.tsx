import { useState } from 'react';
import { BandPicker } from '@/components/BandPicker';
import { Keypad } from '@/components/Keypad';
import { QuietButton } from '@/components/QuietButton';
import { Notice } from '@/components/Notice';
import type { RodState } from '@/domain/job-state';
import type { StepOf } from '@/domain/plan';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';
import {
  valueOfBand,
  valueOfWidth,
  whichReading,
  type CardValue,
  type End,
  type ThreadLots,
} from '../gauge-reading';
import { decimalText, isNumber } from '../numbers';
import { useRun } from '../run-context';

interface GaugeReadProps {
  step: StepOf<'gauge'>;
  rod: RodState | undefined;
  end: End;
  lots: ThreadLots;
  onOtherThread: () => void;
  onByParts: () => void;
  onKept: () => void;
}

/** One end of the crankpin against the card; nothing is judged before it is kept. */
export function GaugeRead({ step, rod, end, lots, onOtherThread, onByParts, onKept }: GaugeReadProps) {
  const { state } = useRun();
  const [band, setBand] = useState<string>();
  const [width, setWidth] = useState<string>();
  const [offCard, setOffCard] = useState<'wider' | 'narrower'>();
  const typed = width === undefined || !isNumber(width) ? undefined : valueOfWidth(state, decimalText(width));
  const value =
    width === undefined ? (band === undefined ? undefined : valueOfBand(state, Number(band))) : typed?.value;
  const { bands, thread } = state.plan.engine.card;
  function pick(id: string) {
    setWidth(undefined);
    setOffCard(undefined);
    setBand(id);
  }
  return (
    <StepFrame
      step={step}
      side={
        width === undefined ? (
          <div className={bands.length > 8 ? '[&_.band]:min-h-18 [&_.bands-grid]:gap-y-3' : undefined}>
            <BandPicker
              label="Touch the band you read on the card"
              bands={bands.map(({ width: widthMm, clearance }, index) => ({
                id: String(index),
                widthMm: Number(widthMm),
                clearance,
              }))}
              picked={band}
              onPick={pick}
              onWider={() => setOffCard('wider')}
              onNarrower={() => setOffCard('narrower')}
            />
          </div>
        ) : (
          <Keypad
            label={`Crushed width, rod ${step.rod} ${end}`}
            unit="mm"
            value={width}
            onChange={setWidth}
            error={typed?.error}
          />
        )
      }
      heading={
        <div className="pb-4">
          <h1 className="floor-step">
            Rod {step.rod}, {end}
          </h1>
          <p className="pt-1 text-lg text-soft">
            {end === 'front' &&
              (step.sets?.cap === 'off' ? 'Cap off straight down, thread left where it sticks. ' : '')}
            Read it where it is widest, in place, against its own card.
          </p>
        </div>
      }
      then={end === 'front' ? 'then the rear end of the same journal' : undefined}
      foot={
        <div className="flex flex-wrap items-center justify-between gap-x-4 gap-y-2">
          <p>
            {thread}, lot {lots.thread}, card {lots.card}
          </p>
          <div className="flex flex-none gap-3">
            <QuietButton shape="wide" label="By its parts" onPress={onByParts} />
            <QuietButton shape="wide" label="Other thread" onPress={onOtherThread} />
          </div>
        </div>
      }
      quiet={
        <QuietButton
          label={width === undefined ? 'Type width' : 'By band'}
          onPress={() => setWidth(width === undefined ? '' : undefined)}
        />
      }
      main={
        <RecordAction
          label={value ? `Keep ${value.clearance} mm` : 'Keep the reading'}
          why={value ? undefined : 'touch a band, or type the width'}
          drafts={() => (value ? [gauged(step, { end, rod, value, lots })] : [])}
          onRecorded={onKept}
        />
      }
    >
      {offCard !== undefined && width === undefined ? (
        <OffCard side={offCard} />
      ) : width !== undefined ? (
        <p className="text-xl">
          Measure the width where the thread is widest. The card turns it into the clearance.
        </p>
      ) : (
        <p className="reading">
          <span className="form-label">{value ? 'read, not kept yet' : 'nothing read yet'}</span>
          <span className="reading-value">
            {value?.clearance ?? '–.–––'}
            <span className="reading-unit"> mm</span>
          </span>
        </p>
      )}
    </StepFrame>
  );
}

function gauged(
  step: StepOf<'gauge'>,
  { end, rod, value, lots }: { end: End; rod: RodState | undefined; value: CardValue; lots: ThreadLots },
) {
  return {
    kind: 'gauged' as const,
    step: step.id,
    data: {
      end,
      ...value,
      unit: 'mm' as const,
      again: whichReading(rod, end),
      threadLot: lots.thread,
      cardLot: lots.card,
    },
  };
}

function OffCard({ side }: { side: 'wider' | 'narrower' }) {
  const run = useRun();
  const words =
    side === 'wider'
      ? 'wider than the widest band: the clearance is tighter than this card can tell'
      : 'narrower than the narrowest band: the clearance is wider than this card can tell';
  return (
    <Notice tone="unsure" title="Off the card">
      <p className="text-lg">
        The thread is {words}. Type the width if it is close, measure again with another thread, or raise a
        deviation.
      </p>
      <div className="flex flex-wrap gap-3 pt-4">
        <QuietButton shape="wide" label="Raise a deviation" onPress={() => run.openSheet('deviation')} />
      </div>
    </Notice>
  );
}
