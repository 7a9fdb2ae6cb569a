import { useSyncExternalStore } from 'react';
import type { Registration } from '@/offline/registration';

/** The registration of this page's service worker, once there is one. */
let registration: Registration | undefined;
const listeners = new Set<() => void>();

/** Remembers the registration, so that screens can tell of a new version. */
export function keepRegistration(made: Registration | undefined): void {
  registration = made;
  made?.subscribe(() => {
    for (const listener of listeners) listener();
  });
  for (const listener of listeners) listener();
}

/** Whether a new version waits, and the way to use it between two actions. */
export function useUpdate(): { isWaiting: boolean; activate: () => void } {
  const isWaiting = useSyncExternalStore(watchUpdate, isUpdateWaiting, () => false);
  return { isWaiting, activate };
}

function isUpdateWaiting(): boolean {
  return registration?.isWaiting() ?? false;
}

function activate(): void {
  registration?.activateBetweenActions();
}

function watchUpdate(listener: () => void): () => void {
  listeners.add(listener);
  return () => listeners.delete(listener);
}
