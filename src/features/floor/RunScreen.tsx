import { Suspense, lazy, useEffect, useState } from 'react';
import { EmptyState } from '@/components/EmptyState';
import { ErrorNote } from '@/components/ErrorNote';
import { FloorFrame } from '@/components/FloorFrame';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import type { JobState } from '@/domain/job-state';
import { phaseToSign } from '@/domain/job-work';
import type { PlanStep } from '@/domain/plan';
import type { JobView } from '@/offline/job-store';
import type { WorkshopRow } from '@/offline/database';
import { capInHand } from './cap-in-hand';
import { comingAfter, currentStep } from './current-step';
import { useFloor, useFloorStore } from './floor-context';
import { Opening } from './Opening';
import { RunContext, type SheetName, type Worker } from './run-context';
import { mustTakeOver } from './shift';
import { fetchLaterScreens, fetchScreenOf, StepScreen } from './steps/StepScreen';
import { useIsOnline } from './use-is-online';
import { useJobTablets } from './use-job-tablets';
import { useMainKeys } from './use-main-keys';
import { useRunOf } from './use-run';
import { useWakeLock } from './use-wake-lock';
import { useWatchfulness } from './use-watchfulness';

const RunSheets = lazy(() => import('./sheets/RunSheets').then((m) => ({ default: m.RunSheets })));
const TakeOverScreen = lazy(() => import('./TakeOverScreen').then((m) => ({ default: m.TakeOverScreen })));
const NothingToDo = lazy(() => import('./NothingToDo').then((m) => ({ default: m.NothingToDo })));
const WorkToSignScreen = lazy(() =>
  import('./WorkToSignScreen').then((m) => ({ default: m.WorkToSignScreen })),
);

const COMING_MS = 500;
const LATER_MS = 4000;

/** One job on the tablet, a step at a time. */
export function RunScreen() {
  const view = useFloor((floor) => floor.view);
  const trouble = useFloor((floor) => floor.trouble);
  const workshop = useFloor((floor) => floor.workshop);
  const person = useWorker();
  if (trouble !== undefined) return <CannotOpen why={trouble} />;
  if (!view || !workshop) return <Opening />;
  if (!person) return <CannotOpen why="Nobody is working on this tablet yet. Go back and touch your name." />;
  return <Running view={view} workshop={workshop} person={person} />;
}

function useWorker(): Worker | undefined {
  const working = useFloor((floor) => floor.working);
  const signedIn = useFloor((floor) => floor.signedIn);
  const who = signedIn.find(({ person }) => person === working);
  return who && { id: who.person, name: who.name, roles: who.roles };
}

function Running({ view, workshop, person }: { view: JobView; workshop: WorkshopRow; person: Worker }) {
  const place = useFloor((floor) => floor.place);
  const device = useFloor((floor) => floor.tablet?.id);
  const tablets = useJobTablets(view);
  const isOnline = useIsOnline();
  const [sheet, setSheet] = useState<SheetName>();
  const step = currentStep(view.state, place);
  const run = useRunOf({ view, workshop, person, step, isOnline, openSheet: setSheet });
  // Never in the middle of a cap, nor over a step that somebody went to themselves; the question comes after.
  const isFree = !place.isVisit && capInHand(view.state) === undefined;
  const signable = isFree ? phaseToSign(view.state, person.id) : undefined;
  useWatchfulness();
  useWakeLock();
  useMainKeys(sheet === undefined);
  useComingScreen(view.state, step);
  useLaterScreens();
  return (
    <RunContext value={run}>
      {mustTakeOver(view.state, person.id, device) ? (
        <Suspense fallback={<Opening />}>
          <TakeOverScreen device={device} tablets={tablets} />
        </Suspense>
      ) : signable ? (
        <Suspense fallback={<Opening />}>
          <WorkToSignScreen phase={signable.name} entries={signable.entries} />
        </Suspense>
      ) : step ? (
        <StepScreen key={step.id} step={step} />
      ) : (
        <Suspense fallback={<Opening />}>
          <NothingToDo />
        </Suspense>
      )}
      {sheet !== undefined && (
        <Suspense fallback={null}>
          <RunSheets name={sheet} step={step} onClose={() => setSheet(undefined)} />
        </Suspense>
      )}
    </RunContext>
  );
}

/** The screen of the step after this one is fetched while this one is worked on. */
function useComingScreen(state: JobState, step: PlanStep | undefined) {
  useEffect(() => {
    if (!step) return;
    const timer = setTimeout(() => {
      const coming = comingAfter(state, step);
      if (coming) fetchScreenOf(coming.kind);
    }, COMING_MS);
    return () => clearTimeout(timer);
  }, [state, step]);
}

/** The screens that come later are fetched once the first action has long been on the screen. */
function useLaterScreens() {
  useEffect(() => {
    const timer = setTimeout(() => {
      fetchLaterScreens();
      // Asked for again when a sheet opens, if it does not come now.
      import('./sheets/RunSheets').catch(() => undefined);
      import('./WorkToSignScreen').catch(() => undefined);
      import('./NothingToDo').catch(() => undefined);
      import('./StartScreen').catch(() => undefined);
    }, LATER_MS);
    return () => clearTimeout(timer);
  }, []);
}

function CannotOpen({ why }: { why: string }) {
  const store = useFloorStore();
  const leave = () => {
    store.getState().leaveJob();
    location.hash = '';
  };
  return (
    <FloorFrame
      job={{ label: 'The Floor' }}
      phase={{ label: 'This job can’t be opened' }}
      sync={{ label: '' }}
      person={{ label: '' }}
      quiet={<QuietButton label="Try again" onPress={() => location.reload()} />}
      main={<MainAction label="Back to the jobs" onPress={leave} />}
    >
      <ErrorNote
        happened={why}
        kept="Nothing that was recorded is lost."
        next="Go back, or try again with a network."
      />
      <div className="pt-6">
        <EmptyState title="No job is open here" />
      </div>
    </FloorFrame>
  );
}
