import type { PlanStep } from '@/domain/plan';
import { setWorking } from '@/offline/tablet';
import { useFloor, useFloorStore } from '../floor-context';
import { sumsAddress } from '../sums-address';
import { useJobTablets } from '../use-job-tablets';
import { useUpdate } from '../use-update';
import { useRun, type SheetName, type Worker } from '../run-context';
import { SignOutSheet } from '../SignOutSheet';
import { CorrectSheet } from './CorrectSheet';
import { DeviationForm } from './DeviationForm';
import { JobSheet } from './JobSheet';
import { PersonSheet } from './PersonSheet';
import { ProblemSheet } from './ProblemSheet';
import { StepsSheet } from './StepsSheet';
import { SyncSheet } from './SyncSheet';
import { TakeBackSheet } from './TakeBackSheet';
import { ToolSheet } from './ToolSheet';
import {
  AfterwardsSheet,
  EndUnfinishedSheet,
  ExtraWorkSheet,
  NotApplicableSheet,
  WaitingForPartSheet,
} from './WordsSheets';

interface RunSheetsProps {
  name: SheetName;
  step: PlanStep | undefined;
  onClose: () => void;
}

/** The sheet of this name over the run screen. */
export function RunSheets({ name, step, onClose }: RunSheetsProps) {
  const store = useFloorStore();
  const run = useRun();
  const signedIn = useFloor((floor) => floor.signedIn);
  const status = useFloor((floor) => floor.sync);
  const view = useFloor((floor) => floor.view);
  const tablets = useJobTablets(view);
  const update = useUpdate();
  const goToSums = (from: Parameters<typeof sumsAddress>[0]) =>
    location.assign(sumsAddress({ job: view?.row.id, ...from }));
  const workOutAdapter = (wanted: number | undefined) =>
    goToSums({ sum: 'adapter', target: wanted?.toString() });
  switch (name) {
    case 'steps':
      return <StepsSheet current={step} onClose={onClose} />;
    case 'job':
      return (
        <JobSheet
          tablets={new Map(tablets.map(({ id, name: called }) => [id, called]))}
          onClose={onClose}
          onLeave={() => (location.hash = '')}
          onSums={() => goToSums({})}
        />
      );
    case 'sync':
      return (
        <SyncSheet
          step={step}
          status={status}
          pending={view?.pending}
          offline={store.getState().offline}
          hasUpdate={update.isWaiting}
          onUpdate={update.activate}
          onClose={onClose}
        />
      );
    case 'person':
      return (
        <PersonSheet
          step={step}
          signedIn={signedIn}
          onClose={onClose}
          onHelpers={store.getState().setHelpers}
          onChanged={(person) => changePerson(store.getState(), person)}
          onSignOut={() => run.openSheet('sign out')}
        />
      );
    case 'sign out':
      return (
        <SignOutSheet
          person={run.person}
          isOnline={run.isOnline}
          onClose={() => run.openSheet('person')}
          onLeft={() => {
            location.hash = '';
          }}
        />
      );
    case 'problem':
      return <ProblemSheet step={step} onClose={onClose} />;
    case 'take back':
      return <TakeBackSheet onClose={onClose} />;
    case 'correct':
      return <CorrectSheet step={step} onClose={onClose} />;
    case 'deviation':
      return <DeviationForm step={step} onClose={onClose} />;
    case 'not applicable':
      return step ? <NotApplicableSheet step={step} onClose={onClose} /> : null;
    case 'waiting for a part':
      return step ? <WaitingForPartSheet step={step} onClose={onClose} /> : null;
    case 'extra work':
      return <ExtraWorkSheet onClose={onClose} />;
    case 'recorded afterwards':
      return (
        <AfterwardsSheet
          onClose={onClose}
          onChoose={(afterwards) => {
            store.getState().setAfterwards(afterwards);
            onClose();
          }}
        />
      );
    case 'end unfinished':
      return <EndUnfinishedSheet onClose={onClose} />;
    case 'torque tool':
      return <ToolSheet hand="torque" step={step} onClose={onClose} onAdapter={workOutAdapter} />;
    case 'angle tool':
      return <ToolSheet hand="angle" step={step} onClose={onClose} onAdapter={workOutAdapter} />;
    case 'measuring tool':
      return <ToolSheet hand="measuring" step={step} onClose={onClose} onAdapter={workOutAdapter} />;
  }
}

/** Someone else works here now; that they took over has already made the Floor ask about what was on the screen. */
async function changePerson(
  floor: ReturnType<ReturnType<typeof useFloorStore>['getState']>,
  person: Worker,
): Promise<void> {
  await setWorking(floor.offline, person.id);
  await floor.reload();
  floor.setHelpers([]);
}
