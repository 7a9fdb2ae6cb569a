import { useSyncExternalStore } from 'react';

const QUERY = '(orientation: portrait)';

/** Whether the tablet is held upright. */
export function useIsPortrait(): boolean {
  return useSyncExternalStore(watchOrientation, isPortrait, () => false);
}

function isPortrait(): boolean {
  return typeof matchMedia === 'function' && matchMedia(QUERY).matches;
}

function watchOrientation(listener: () => void): () => void {
  if (typeof matchMedia !== 'function') return () => undefined;
  const query = matchMedia(QUERY);
  query.addEventListener('change', listener);
  return () => query.removeEventListener('change', listener);
}
