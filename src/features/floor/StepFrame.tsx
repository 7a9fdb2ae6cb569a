import { lazy, Suspense, type ReactNode } from 'react';
import { Caution } from '@/components/Caution';
import { EngineBelow } from '@/components/EngineBelow';
import { FloorFrame } from '@/components/FloorFrame';
import { QuietButton } from '@/components/QuietButton';
import { Sign } from '@/components/Sign';
import { isBlocked } from '@/domain/job-deviation';
import { uncheckedSignatures } from '@/domain/job-evidence';
import type { EntryKind } from '@/domain/entry';
import type { PlanStep } from '@/domain/plan';
import { comingAfter } from './current-step';
import { engineView } from '@/domain/engine-view';
import { lastAct, lastActWords } from './last-act';
import { useRun, type Run } from './run-context';
import { useIsPortrait } from './use-is-portrait';

const VerdictBand = lazy(() => import('./VerdictBand').then((m) => ({ default: m.VerdictBand })));
const WearBand = lazy(() => import('./WearBand').then((m) => ({ default: m.WearBand })));

/** Acts that may have a verdict. */
const READINGS = new Set<EntryKind>(['gauged', 'read', 'counted']);

const STANDING =
  'The vehicle maker’s instructions, local codes and licensed practice prevail over this sheet.';

export interface StepFrameProps {
  step: PlanStep;
  /** Takes the place of the step's title. */
  heading?: ReactNode;
  /** Takes the place of the engine drawing; `null` gives its room to the step. */
  side?: ReactNode;
  /** The second quiet button; the first is always "Problem". */
  quiet?: ReactNode;
  main: ReactNode;
  /** What comes after, if it is not simply the next step; `null` leaves the line out. */
  then?: string | null | undefined;
  /** The heading is loud and leaves room beside "Take back". */
  isLoud?: boolean | undefined;
  /** The screen shows what was just recorded, so that no line says it again. */
  isResult?: boolean | undefined;
  /** Small words at the foot, such as the tool in hand. */
  foot?: ReactNode;
  children?: ReactNode;
}

/** One step on the Floor: what was done before it small, the step large, what comes after it small. */
export function StepFrame(props: StepFrameProps) {
  const { step, heading, side, quiet, main, then, isLoud = false, isResult = false, foot, children } = props;
  const run = useRun();
  const isPortrait = useIsPortrait();
  const isRodStep = step.rod !== undefined || step.kind === 'turn';
  const engine =
    isPortrait && !isRodStep ? undefined : (
      <EngineBelow {...engineView(run.state, step, run.workshop.zone)} />
    );
  const next = then === undefined ? nextWords(run, step) : (then ?? undefined);
  return (
    <FloorFrame
      {...run.cells}
      flash={run.flash}
      notice={<RunNotice run={run} step={step} />}
      side={side === null ? undefined : (side ?? engine)}
      quiet={
        <>
          <QuietButton label="Problem" onPress={() => run.openSheet('problem')} />
          {quiet ?? <QuietButton label="Steps" onPress={() => run.openSheet('steps')} />}
        </>
      }
      main={main}
    >
      <div className="flex min-h-full flex-col">
        {!isResult && <Before run={run} isLoud={isLoud} />}
        <Refusal run={run} />
        <div data-prompt>{heading ?? <StepHeading step={step} />}</div>
        {children}
        <div className="mt-auto pt-4">
          {(next !== undefined || foot !== undefined) && (
            <div className="border-t border-rule pt-3">
              {next !== undefined && <p className="floor-then">{next}</p>}
              {foot !== undefined && <div className="text-lg text-soft">{foot}</div>}
            </div>
          )}
        </div>
      </div>
    </FloorFrame>
  );
}

/** The title of a step with its cautions, how it is done and why. */
export function StepHeading({ step }: { step: PlanStep }) {
  return (
    <div className="grid gap-4 pb-4">
      <h1 className="floor-step">{step.title}</h1>
      <StepCautions step={step} />
      <StepDetails step={step} />
    </div>
  );
}

/** How a step is done, a line a sentence, and why. */
export function StepDetails({ step }: { step: PlanStep }) {
  return (
    <>
      <HowLines how={step.how} />
      {step.why !== undefined && <p className="max-w-[62ch] text-lg text-soft">{step.why}</p>}
    </>
  );
}

/** How a step is done, a line a sentence. */
export function HowLines({ how }: { how: string[] }) {
  if (how.length === 0) return null;
  return (
    <ul className="grid max-w-[62ch] gap-1.5 text-lg">
      {how.map((line) => (
        <li key={line} className="grid grid-cols-[1.25rem_1fr]">
          <span aria-hidden="true">–</span>
          <span>{line}</span>
        </li>
      ))}
    </ul>
  );
}

/** The cautions of a step, gravest first as the procedure gives them, with the standing line once. */
export function StepCautions({ step }: { step: PlanStep }) {
  return step.cautions.map(({ word, text }, index) => (
    <Caution
      key={text}
      level={CAUTION_LEVELS[word]}
      standing={index === step.cautions.length - 1 ? STANDING : undefined}
    >
      {text}
    </Caution>
  ));
}

const CAUTION_LEVELS = {
  DANGER: 'danger',
  WARNING: 'warning',
  CAUTION: 'caution',
  NOTICE: 'notice',
} as const;

/** What was recorded last: a reading with its verdict, large; anything else in a line. */
function Before({ run, isLoud }: { run: Run; isLoud: boolean }) {
  const [act] = lastAct(run.state);
  const line = <LastAct run={run} isLoud={isLoud} />;
  const isGraded = act?.kind === 'graded';
  if (!act || !(isGraded || READINGS.has(act.kind))) return line;
  return (
    <Suspense fallback={line}>
      {isGraded ? <WearBand otherwise={line} /> : <VerdictBand otherwise={line} />}
    </Suspense>
  );
}

function LastAct({ run, isLoud }: { run: Run; isLoud: boolean }) {
  const acts = lastAct(run.state);
  if (acts.length === 0) return null;
  return (
    <div className={isLoud ? 'floor-head pb-4' : 'floor-head pb-3 [&>.quiet-button]:mb-0'}>
      <p className="floor-done">{lastActWords(run, acts)}</p>
      <QuietButton shape="wide" label="Take back" onPress={() => run.openSheet('take back')} />
    </div>
  );
}

function Refusal({ run: { refusal } }: { run: Run }) {
  if (!refusal) return null;
  return (
    <div role="alert" className="mb-4 rounded-md border-4 border-outside bg-sheet px-5 py-3 text-lg">
      <p className="flex items-center gap-2 font-bold text-outside">
        <Sign name="cross" />
        Not recorded
      </p>
      <p>{refusal.why}</p>
      {refusal.unlock !== undefined && <p className="font-bold">{refusal.unlock}</p>}
    </div>
  );
}

/** What holds over the whole job for now: work at risk, a deviation that is open on this step. */
function RunNotice({ run, step }: { run: Run; step: PlanStep }) {
  const [unchecked] = uncheckedSignatures(run.state);
  const lines = [
    ...(run.afterwards
      ? [`Recorded afterwards: done ${run.afterwards.when}. The next touch carries it.`]
      : []),
    ...(unchecked && step.kind !== 'hold'
      ? [
          `At risk: the signature of ${unchecked.name} has not been checked yet. Bring the tablet to the network.`,
        ]
      : []),
    ...(isBlocked(run.state, step.id) && step.kind !== 'gauge'
      ? ['A deviation is open on this step: what follows waits for its disposition.']
      : []),
  ];
  if (lines.length === 0) return undefined;
  return (
    <div className="grid gap-1 bg-shade px-7 py-2 text-lg font-bold" role="status">
      {lines.map((line) => (
        <p key={line}>{line}</p>
      ))}
    </div>
  );
}

function nextWords({ state }: Run, step: PlanStep): string | undefined {
  const next = comingAfter(state, step);
  return next && `then ${next.title.charAt(0).toLowerCase()}${next.title.slice(1)}`;
}
