import { lazy, Suspense, type ReactNode } from 'react';
import { whyNot } from '@/domain/job';
import type { PlanStep } from '@/domain/plan';
import { StepFrame } from '../StepFrame';
import { useRun } from '../run-context';
import { DoStep } from './DoStep';
import { PlaceStep } from './PlaceStep';
import { TightenStep } from './TightenStep';

/*
 * Screens that the first action seldom needs come when they are asked for, or once nothing more urgent is to be
 * done; the service worker holds them all, so that they come without a network too.
 */
const loaders = {
  barred: () => import('./BarredStep'),
  done: () => import('./DoneStep'),
  refit: () => import('./RefitStep'),
  remove: () => import('./RemoveStep'),
  turn: () => import('./TurnStep'),
  count: () => import('./CountStep'),
  fill: () => import('./FillStep'),
  fit: () => import('./FitStep'),
  inspect: () => import('./InspectStep'),
  photograph: () => import('./PhotographStep'),
  read: () => import('./ReadStep'),
  'choose-shells': () => import('./ChooseShellsStep'),
  'grade-shells': () => import('./GradeShellsStep'),
  gauge: () => import('./GaugeStep'),
  hold: () => import('./HoldStep'),
  witness: () => import('./WitnessStep'),
  watch: () => import('./WatchStep'),
  drive: () => import('./DriveStep'),
  'make-safe': () => import('./MakeSafeStep'),
  resume: () => import('./ResumeStep'),
  'hand-over': () => import('./HandOverStep'),
  'what was read': () => import('../VerdictBand'),
  'what was graded': () => import('../WearBand'),
};

/** Kinds whose record is told over the next screen. */
const TOLD_AFTER = new Set<PlanStep['kind']>(['read', 'gauge', 'count']);
const BarredStep = lazy(() => loaders.barred().then((m) => ({ default: m.BarredStep })));
const DoneStep = lazy(() => loaders.done().then((m) => ({ default: m.DoneStep })));
const RefitStep = lazy(() => loaders.refit().then((m) => ({ default: m.RefitStep })));
const RemoveStep = lazy(() => loaders.remove().then((m) => ({ default: m.RemoveStep })));
const TurnStep = lazy(() => loaders.turn().then((m) => ({ default: m.TurnStep })));
const CountStep = lazy(() => loaders.count().then((m) => ({ default: m.CountStep })));
const FillStep = lazy(() => loaders.fill().then((m) => ({ default: m.FillStep })));
const FitStep = lazy(() => loaders.fit().then((m) => ({ default: m.FitStep })));
const InspectStep = lazy(() => loaders.inspect().then((m) => ({ default: m.InspectStep })));
const PhotographStep = lazy(() => loaders.photograph().then((m) => ({ default: m.PhotographStep })));
const ReadStep = lazy(() => loaders.read().then((m) => ({ default: m.ReadStep })));
const ChooseShellsStep = lazy(() =>
  loaders['choose-shells']().then((m) => ({ default: m.ChooseShellsStep })),
);
const GradeShellsStep = lazy(() => loaders['grade-shells']().then((m) => ({ default: m.GradeShellsStep })));
const GaugeStep = lazy(() => loaders.gauge().then((m) => ({ default: m.GaugeStep })));
const HoldStep = lazy(() => loaders.hold().then((m) => ({ default: m.HoldStep })));
const WitnessStep = lazy(() => loaders.witness().then((m) => ({ default: m.WitnessStep })));
const WatchStep = lazy(() => loaders.watch().then((m) => ({ default: m.WatchStep })));
const DriveStep = lazy(() => loaders.drive().then((m) => ({ default: m.DriveStep })));
const MakeSafeStep = lazy(() => loaders['make-safe']().then((m) => ({ default: m.MakeSafeStep })));
const ResumeStep = lazy(() => loaders.resume().then((m) => ({ default: m.ResumeStep })));
const HandOverStep = lazy(() => loaders['hand-over']().then((m) => ({ default: m.HandOverStep })));

/** Brings the screen of one kind of step, so that nobody waits for it when the step comes. */
export function fetchScreenOf(kind: PlanStep['kind']): void {
  if (kind in loaders) fetchQuietly(loaders[kind as keyof typeof loaders]);
  if (TOLD_AFTER.has(kind)) fetchQuietly(loaders['what was read']);
  if (kind === 'grade-shells') fetchQuietly(loaders['what was graded']);
}

/** Brings the screens that come later, once nothing more urgent is to be done. */
export function fetchLaterScreens(): void {
  for (const load of Object.values(loaders)) fetchQuietly(load);
}

/** Not here yet is no trouble: the screen asks for it again when it is needed. */
function fetchQuietly(load: () => Promise<unknown>): void {
  load().catch(() => undefined);
}

/** The screen of one step: its own by its kind, or what stands in its way, or what was recorded on it. */
export function StepScreen({ step }: { step: PlanStep }) {
  return (
    <Suspense fallback={<StepFrame step={step} main={null} />}>{screenOf(step, useStanding(step))}</Suspense>
  );
}

type Standing = 'open' | 'barred' | 'done';

function useStanding(step: PlanStep): Standing {
  const { state } = useRun();
  const status = state.steps[step.id]?.status;
  if (status === 'not applicable') return 'done';
  if (status === 'done' && !OWN_DONE_SCREEN.has(step.kind)) return 'done';
  if (status === 'done' || isSignedAlready(step, state.signatures)) return 'open';
  return whyNot(state, step.id).ok ? 'open' : 'barred';
}

/** Kinds whose own screen shows what was recorded. */
const OWN_DONE_SCREEN = new Set<PlanStep['kind']>([
  'read',
  'gauge',
  'hold',
  'count',
  'watch',
  'drive',
  'choose-shells',
  'grade-shells',
  // One that was lost is taken again.
  'photograph',
]);

function isSignedAlready(
  step: PlanStep,
  signatures: { step: string; reopened?: string | undefined }[],
): boolean {
  return (
    step.kind === 'hold' &&
    signatures.some((signature) => signature.step === step.id && signature.reopened === undefined)
  );
}

function screenOf(step: PlanStep, standing: Standing): ReactNode {
  if (standing === 'barred') return <BarredStep step={step} />;
  if (standing === 'done') return <DoneStep step={step} />;
  switch (step.kind) {
    case 'do':
      return <DoStep step={step} />;
    case 'remove':
      return <RemoveStep step={step} />;
    case 'refit':
      return <RefitStep step={step} />;
    case 'place':
      return <PlaceStep step={step} />;
    case 'count':
      return <CountStep step={step} />;
    case 'inspect':
      return <InspectStep step={step} />;
    case 'read':
      return <ReadStep step={step} />;
    case 'turn':
      return <TurnStep step={step} />;
    case 'gauge':
      return <GaugeStep step={step} />;
    case 'choose-shells':
      return <ChooseShellsStep step={step} />;
    case 'grade-shells':
      return <GradeShellsStep step={step} />;
    case 'tighten':
      return <TightenStep step={step} />;
    case 'fit':
      return <FitStep step={step} />;
    case 'fill':
      return <FillStep step={step} />;
    case 'photograph':
      return <PhotographStep step={step} />;
    case 'watch':
      return <WatchStep step={step} />;
    case 'drive':
      return <DriveStep step={step} />;
    case 'hold':
      return <HoldStep step={step} />;
    case 'witness':
      return <WitnessStep step={step} />;
    case 'make-safe':
      return <MakeSafeStep step={step} />;
    case 'resume':
      return <ResumeStep step={step} />;
    case 'hand-over':
      return <HandOverStep step={step} />;
  }
}
