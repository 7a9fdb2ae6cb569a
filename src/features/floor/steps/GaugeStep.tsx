import { useState } from 'react';
import type { StepOf } from '@/domain/plan';
import { knownLots } from '../known-lots';
import { LotEntry } from '../LotEntry';
import { MainAction } from '@/components/MainAction';
import { StepFrame } from '../StepFrame';
import { dataOf } from '../done-words';
import { endToRead, type End, type ThreadLots } from '../gauge-reading';
import { useRun, type Run } from '../run-context';
import { GaugeKept } from './GaugeKept';
import { GaugeParts } from './GaugeParts';
import { GaugeRead } from './GaugeRead';

/**
 * The oil clearance of one rod: front, then rear, each read off the card and judged after it is kept. An end that
 * is inside goes over to the next screen with its verdict; one that isn't has a screen of its own.
 */
export function GaugeStep({ step }: { step: StepOf<'gauge'> }) {
  const run = useRun();
  const rod = step.rod === undefined ? undefined : run.state.rods[step.rod];
  const [lots, setLots] = useState(() => lotsInUse(run));
  const [again, setAgain] = useState<End>();
  const [byParts, setByParts] = useState(false);
  const [keptEnd, setKeptEnd] = useState<End | undefined>(() => endToShow(run, step));
  const kept = keptEnd !== undefined && again === undefined ? rod?.[keptEnd] : undefined;
  const isPassing = kept?.verdict === 'inside' && (!rod?.front || !rod.rear);
  if (kept && rod && !isPassing) {
    return (
      <GaugeKept
        step={step}
        rod={rod}
        kept={kept}
        onRear={() => setKeptEnd(undefined)}
        onReadAgain={(end) => setAgain(end)}
        onByParts={(end) => {
          setAgain(end);
          setByParts(true);
        }}
      />
    );
  }
  const end = endToRead(rod, again);
  function settleKept() {
    setAgain(undefined);
    setByParts(false);
    setKeptEnd(end);
  }
  if (byParts) {
    return (
      <GaugeParts
        key={end}
        step={step}
        rod={rod}
        end={end}
        onThread={() => setByParts(false)}
        onKept={settleKept}
      />
    );
  }
  if (!lots) return <AskThread step={step} onLots={setLots} />;
  return (
    <GaugeRead
      key={`${end} ${again ?? ''}`}
      step={step}
      rod={rod}
      end={end}
      lots={lots}
      onOtherThread={() => setLots(undefined)}
      onByParts={() => setByParts(true)}
      onKept={settleKept}
    />
  );
}

/** The end whose own screen comes first: the rear once it is read, else a front that isn't inside. */
function endToShow({ state }: Run, { rod }: StepOf<'gauge'>): End | undefined {
  const present = rod === undefined ? undefined : state.rods[rod];
  if (present?.rear) return 'rear';
  return present?.front && present.front.verdict !== 'inside' ? 'front' : undefined;
}

/** Thread and card as last used on this job, else the only lot of the kit check. */
function lotsInUse({ state }: Run): ThreadLots | undefined {
  const gauged = Object.values(state.steps)
    .flatMap(({ entries }) => entries.filter(({ kind }) => kind === 'gauged'))
    .sort((a, b) => a.at.localeCompare(b.at))
    .map((kept) => dataOf(kept, 'gauged'))
    .findLast(({ threadLot }) => threadLot !== undefined);
  if (gauged?.threadLot !== undefined && gauged.cardLot !== undefined)
    return { thread: gauged.threadLot, card: gauged.cardLot };
  const known = knownLots(state, 'gauging thread');
  const [only] = known;
  return known.length === 1 && only !== undefined ? { thread: only, card: only } : undefined;
}

function AskThread({ step, onLots }: { step: StepOf<'gauge'>; onLots: (lots: ThreadLots) => void }) {
  const { state } = useRun();
  const [lot, setLot] = useState('');
  const { thread } = state.plan.engine.card;
  return (
    <StepFrame
      step={step}
      side={null}
      heading={<h1 className="floor-step pb-2">Which thread, with its own card?</h1>}
      main={
        <MainAction
          label="Use this thread and its card"
          why={lot === '' ? 'the lot is needed' : undefined}
          onPress={() => onLots({ thread: lot, card: lot })}
        />
      }
    >
      <p className="pb-4 text-lg text-soft">{thread}. A thread is read against the card of its own packet.</p>
      <LotEntry
        part="gauging thread"
        known={knownLots(state, 'gauging thread')}
        value={lot}
        onChange={setLot}
      />
    </StepFrame>
  );
}
