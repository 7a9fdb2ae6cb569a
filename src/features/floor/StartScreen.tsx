import { lazy, Suspense, useEffect, useState } from 'react';
import { EmptyState } from '@/components/EmptyState';
import { FloorFrame } from '@/components/FloorFrame';
import { Notice } from '@/components/Notice';
import { QuietButton } from '@/components/QuietButton';
import { syncWords } from '@/components/sync-words';
import type { JobRow } from '@/offline/database';
import { makeAvailableOffline } from '@/offline/prefetch';
import type { Outcome } from '@/offline/server-call';
import { signInAgainWords } from '@/offline/sync-status';
import { setWorking } from '@/offline/tablet';
import { useFloor, useFloorStore } from './floor-context';
import type { FloorState, SignedInPerson } from './floor-store';
import { JobRows } from './JobRows';
import { bringWork, finishEnrolment, nameTablet, signIn } from './sign-in';
import { SignInForm } from './SignInForm';
import { SignOutSheet } from './SignOutSheet';
import { TabletForm } from './TabletForm';
import { clockTime } from '@/domain/time-words';
import { useIsOnline } from './use-is-online';
import { sumsAddress } from './sums-address';
import { useUpdate } from './use-update';

const SaveToFile = lazy(() => import('./sheets/SaveToFile').then((m) => ({ default: m.SaveToFile })));

/** The first screen: who works here, and the jobs of this tablet; all of it from the tablet itself. */
export function StartScreen() {
  const floor = useFloor((state) => state);
  const isOnline = useIsOnline();
  const [isAdding, setAdding] = useState(false);
  const [leaving, setLeaving] = useState<SignedInPerson>();
  const { act, isBusy, trouble } = useServerActs();
  const { offline, working, signedIn, tablet } = floor;
  const update = useUpdate();
  const { refused, signInAgain } = floor.sync;
  const lostKeys = signInAgain.length;
  const mustSignIn = signInAgainWords(signInAgain);
  const { reload } = floor;
  useEffect(() => {
    // What the server refuses, or has forgotten, while this screen stands is told on its rows.
    void reload();
  }, [reload, refused, lostKeys]);
  const isCalm = !isBusy && !isAdding && leaving === undefined;
  useEffect(() => {
    // Nobody is in the middle of anything here.
    if (update.isWaiting && isCalm) update.activate();
  }, [update, isCalm]);
  const person = signedIn.find((who) => who.person === working);
  const needsSignIn = floor.isReady && (signedIn.length === 0 || isAdding);
  const needsName = floor.isReady && !needsSignIn && tablet?.enrolled === false;
  return (
    <FloorFrame
      job={{ label: 'The Floor', note: tablet?.name ?? 'this tablet' }}
      phase={{ label: 'Jobs', note: 'touch one to work on it' }}
      sync={startSync(floor, isOnline)}
      person={{
        label: person?.name ?? 'Nobody yet',
        note: person ? person.roles.join(', ') : signedIn.length === 0 ? 'sign in first' : 'touch your name',
      }}
    >
      <div className="mx-auto grid max-w-5xl gap-6">
        {!needsSignIn && !needsName && <h1 className="unseen">The Floor</h1>}
        {trouble !== undefined && <Notice tone="stop" title={trouble} isAlert />}
        {needsSignIn && (
          <SignInForm
            isOnline={isOnline}
            isBusy={isBusy}
            onCancel={signedIn.length === 0 ? undefined : () => setAdding(false)}
            onSignIn={(given) =>
              act(
                () => signIn(offline, given),
                () => setAdding(false),
              )
            }
          />
        )}
        {tablet?.mustEnrolAgain && floor.sync.trouble?.code === 'lost-tablet' && (
          <Notice tone="stop" title={floor.sync.trouble.words} />
        )}
        {mustSignIn !== undefined && !needsSignIn && (
          <Notice tone="unsure" title={mustSignIn}>
            Touch “Add a person” and sign in there.
          </Notice>
        )}
        {needsName && working !== null && (
          <TabletForm
            isBusy={isBusy}
            mustAgain={tablet.mustEnrolAgain === true}
            onName={(name) => act(() => nameTablet(offline, name, working))}
          />
        )}
        {tablet?.mustEnrolAgain && (
          <Suspense fallback={null}>
            <SaveToFile offline={offline} />
          </Suspense>
        )}
        {floor.isReady && !needsSignIn && (
          <People
            floor={floor}
            onAdd={() => setAdding(true)}
            onLeave={setLeaving}
            onPick={(id) =>
              act(async () => {
                await setWorking(offline, id);
                return isOnline ? finishEnrolment(offline, id) : { ok: true };
              })
            }
          />
        )}
        {floor.isReady && !needsSignIn && !needsName && (
          <JobList floor={floor} isOnline={isOnline} isBusy={isBusy} act={act} />
        )}
      </div>
      {leaving && (
        <SignOutSheet
          person={{ id: leaving.person, name: leaving.name }}
          isOnline={isOnline}
          onClose={() => setLeaving(undefined)}
          onLeft={() => setLeaving(undefined)}
        />
      )}
    </FloorFrame>
  );
}

type Act = (work: () => Promise<Outcome>, then?: () => void) => void;

/** What needs the server is tried, and told in words when it fails; the tablet is read again either way. */
function useServerActs(): { act: Act; isBusy: boolean; trouble: string | undefined } {
  const store = useFloorStore();
  const [isBusy, setBusy] = useState(false);
  const [trouble, setTrouble] = useState<string>();
  async function run(work: () => Promise<Outcome>, then?: () => void): Promise<void> {
    setBusy(true);
    setTrouble(undefined);
    const outcome = await work();
    await store.getState().reload();
    setBusy(false);
    if (outcome.ok) then?.();
    else setTrouble(outcome.why);
  }
  return { act: (work, then) => void run(work, then), isBusy, trouble };
}

function startSync({ sync, workshop }: FloorState, isOnline: boolean) {
  return syncWords({
    onTablet: sync.onTablet + sync.waiting,
    isOnline,
    refused: sync.refused,
    ...(sync.lastSyncAt === undefined || !workshop
      ? {}
      : { lastSent: clockTime(sync.lastSyncAt, workshop.zone) }),
  });
}

interface PeopleProps {
  floor: FloorState;
  onAdd: () => void;
  onPick: (person: string) => void;
  onLeave: (person: SignedInPerson) => void;
}

function People({ floor, onAdd, onPick, onLeave }: PeopleProps) {
  const working = floor.signedIn.find(({ person }) => person === floor.working);
  return (
    <section>
      <div className="flex flex-wrap items-end justify-between gap-3 border-b-2 border-text pb-2">
        <h2 className="text-xl">Who is working</h2>
        <div className="flex flex-wrap gap-3">
          {working && (
            <QuietButton shape="wide" label={`Sign ${working.name} out`} onPress={() => onLeave(working)} />
          )}
          <QuietButton shape="wide" sign="plus" label="Add a person" onPress={onAdd} />
        </div>
      </div>
      <div className="flex flex-wrap gap-3 pt-4 [&_.quiet-button]:text-xl">
        {floor.signedIn.map(({ person, name, hasKey, mustSignIn }) => (
          <QuietButton
            key={person}
            shape="wide"
            label={mustSignIn ? `${name}, sign in again` : hasKey ? name : `${name}, no key here yet`}
            isPressed={person === floor.working}
            onPress={() => onPick(person)}
          />
        ))}
      </div>
    </section>
  );
}

interface JobListProps {
  floor: FloorState;
  isOnline: boolean;
  isBusy: boolean;
  act: Act;
}

function JobList({ floor, isOnline, isBusy, act }: JobListProps) {
  const { offline, working } = floor;
  return (
    <section>
      <div className="flex flex-wrap items-end justify-between gap-3 border-b-2 border-text pb-2">
        <h2 className="text-xl">Open jobs</h2>
        <div className="flex flex-wrap gap-3">
          <QuietButton shape="wide" label="Sums" onPress={() => location.assign(sumsAddress({}))} />
          <QuietButton
            shape="wide"
            label={isBusy ? 'Looking…' : 'Look for jobs'}
            why={isOnline ? undefined : 'no network'}
            onPress={() => act(() => bringWork(offline, working))}
          />
        </div>
      </div>
      {floor.jobs.length === 0 ? (
        <div className="pt-6">
          <EmptyState title="No job on this tablet yet">
            A supervisor opens a job at a desk. With a network, “Look for jobs” brings it here.
          </EmptyState>
        </div>
      ) : (
        <JobRows
          jobs={mineFirst(floor.jobs, working)}
          working={working}
          isOnline={isOnline}
          refused={floor.refused}
          onOpen={(job) => (location.hash = `job=${job}`)}
          onKeep={(job) => act(() => makeAvailableOffline(offline, job))}
        />
      )}
    </section>
  );
}

function mineFirst(jobs: JobRow[], working: string | null): JobRow[] {
  const isMine = (job: JobRow) => (working !== null && job.people.includes(working) ? 0 : 1);
  return [...jobs].sort(
    (a, b) =>
      isMine(a) - isMine(b) ||
      (a.promisedOn ?? '9').localeCompare(b.promisedOn ?? '9') ||
      a.number.localeCompare(b.number),
  );
}
