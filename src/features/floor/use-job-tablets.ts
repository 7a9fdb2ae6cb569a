import { useEffect } from 'react';
import type { JobTablet } from '@/offline/database';
import type { JobView } from '@/offline/job-store';
import { pullJobList } from '@/offline/prefetch';
import { useFloor, useFloorStore } from './floor-context';
import { useIsOnline } from './use-is-online';

/**
 * The tablets that recorded in the job, and when each was last heard; asked for again when one turns up that is
 * not known here.
 */
export function useJobTablets(view: JobView | undefined): readonly JobTablet[] {
  const store = useFloorStore();
  const isOnline = useIsOnline();
  const listed = useFloor((floor) => floor.jobs.find(({ id }) => id === view?.job)?.tablets);
  const own = useFloor((floor) => floor.tablet?.id);
  const unknown = view && unknownTablet(view, own, listed ?? []);
  useEffect(() => {
    if (unknown === undefined || !isOnline) return;
    const { offline, reload } = store.getState();
    void pullJobList(offline).then(reload);
  }, [store, unknown, isOnline]);
  return listed ?? NONE;
}

const NONE: readonly JobTablet[] = [];

/** A tablet that worked on the job last, or was lost with records of it, and has no name here yet. */
function unknownTablet(
  { state }: JobView,
  own: string | undefined,
  known: readonly JobTablet[],
): string | undefined {
  const lost = state.unstepped.flatMap(({ kind, data }) =>
    kind === 'tablet-lost' && 'tablet' in data ? [data.tablet] : [],
  );
  const last = state.working === undefined ? [] : [state.working.device];
  return [...lost, ...last].find((id) => id !== own && !known.some((tablet) => tablet.id === id));
}
