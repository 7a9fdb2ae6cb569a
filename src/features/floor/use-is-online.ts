import { useSyncExternalStore } from 'react';
import { useFloor } from './floor-context';

/** Whether the server can be reached as far as anybody knows: the browser says so, and the last try didn't fail. */
export function useIsOnline(): boolean {
  const hasNetwork = useSyncExternalStore(
    watchNetwork,
    () => navigator.onLine,
    () => true,
  );
  const code = useFloor((floor) => floor.sync.trouble?.code);
  return hasNetwork && code !== 'no-network';
}

function watchNetwork(listener: () => void): () => void {
  addEventListener('online', listener);
  addEventListener('offline', listener);
  return () => {
    removeEventListener('online', listener);
    removeEventListener('offline', listener);
  };
}
