import { useMemo } from 'react';
import { syncWords } from '@/components/sync-words';
import { coverageOf, coverWork } from '@/offline/evidence';
import type { JobView } from '@/offline/job-store';
import { photoUrl } from '@/offline/kept-photo';
import { canSignWithPin } from '@/offline/tablet';
import type { Whereabouts, WorkshopRow } from '@/offline/database';
import type { PlanStep } from '@/domain/plan';
import { useFloor, useFloorStore } from './floor-context';
import type { FloorState } from './floor-store';
import type { Run, SheetName, TopCell, Worker } from './run-context';
import { clockTime } from '@/domain/time-words';

interface Parts {
  view: JobView;
  workshop: WorkshopRow;
  person: Worker;
  step: PlanStep | undefined;
  isOnline: boolean;
  openSheet: (name: SheetName) => void;
}

/** The store's state and actions as the screens of a run use them. */
export function useRunOf({ view, workshop, person, step, isOnline, openSheet }: Parts): Run {
  const store = useFloorStore();
  const state = useFloor((floor) => floor);
  const stable = useMemo(() => stableParts(store.getState), [store]);
  return {
    ...stable,
    state: view.state,
    workshop,
    person,
    helpers: state.helpers,
    isOnline,
    isBusy: state.isRecording || state.isSettling,
    refusal: state.refusal,
    refused: view.refused,
    // Only for the moment after a record: a screen that comes later must not flash for it again.
    flash: state.isSettling ? state.flash : 0,
    askAbout: state.isAway ? state.place.action : undefined,
    afterwards: state.afterwards,
    cells: topCells({
      view,
      workshop,
      person,
      step,
      isOnline,
      openSheet,
      sync: state.sync,
      helpers: state.helpers,
    }),
    whereIs: (id) => whereIs(view, id),
    openSheet,
  };
}

/** What never changes while the page lives, so that effects can name it. */
function stableParts(get: () => FloorState) {
  const { offline, record, goTo, goOn, showAction, settleAction } = get();
  return {
    now: () => offline.now(),
    record,
    goTo,
    goOn,
    showAction,
    settleAction,
    coverage: async (holdStepId: string) => coverageOf(offline, openView(get()), holdStepId),
    ownWork: async () => coverWork(offline, openView(get()), get().working ?? ''),
    photoUrl: (hash: string) => photoUrl(offline, hash),
    canSign: (id: string) => canSignWithPin(offline, id),
    syncNow: async () => {
      await offline.sync.now();
    },
  };
}

function openView({ offline, jobId }: FloorState): JobView {
  const view = jobId === null ? undefined : offline.jobs.get(jobId);
  if (!view) throw new Error('The job is not open on this page.');
  return view;
}

function whereIs(view: JobView, id: string): Whereabouts {
  const pending = view.pending.find((row) => row.id === id);
  if (pending) return pending.where;
  return view.refused.some((row) => row.id === id) ? 'refused' : 'sent';
}

function topCells(
  parts: Parts & { sync: FloorState['sync']; helpers: string[] },
): Record<'job' | 'phase' | 'sync' | 'person', TopCell> {
  const { view, workshop, person, step, isOnline, openSheet, sync, helpers } = parts;
  const { row, state } = view;
  const open = state.deviations.filter(({ disposed, blocks }) => !disposed && blocks).length;
  const words = syncWords({
    onTablet: sync.onTablet + sync.waiting,
    isOnline,
    refused: view.refused.length,
    ...(sync.lastSyncAt === undefined ? {} : { lastSent: clockTime(sync.lastSyncAt, workshop.zone) }),
  });
  return {
    job: {
      label: `Job ${row.number}, ${row.engine}`,
      note: [
        row.registration,
        open > 0 ? `${open} deviation${open === 1 ? '' : 's'}` : undefined,
        state.open.length > 0 ? `${state.open.length} open` : undefined,
      ]
        .filter((part) => part !== undefined)
        .join(' · '),
      onPress: () => openSheet('job'),
      does: 'open list and deviations',
    },
    phase: {
      label: phaseName(view, step),
      ...(step ? { note: `${step.section.toLowerCase()}, class ${step.class}` } : {}),
      onPress: () => openSheet('steps'),
      does: 'list of steps',
    },
    sync: { ...words, onPress: () => openSheet('sync'), does: 'where the records are' },
    person: {
      label: person.name,
      note: helpers.length === 0 ? 'change' : `with ${helpers.map((id) => nameOf(workshop, id)).join(', ')}`,
      onPress: () => openSheet('person'),
      does: 'change who is working',
    },
  };
}

function phaseName({ state }: JobView, step: PlanStep | undefined): string {
  return state.plan.phases.find(({ id }) => id === step?.phase)?.name ?? 'Steps';
}

function nameOf(workshop: WorkshopRow, id: string): string {
  return workshop.people.find((person) => person.id === id)?.name ?? id;
}
