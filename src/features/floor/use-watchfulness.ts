import { useEffect } from 'react';
import { AWAY_AFTER_MS } from '@/offline/places';
import { useFloorStore } from './floor-context';

const LOOK_MS = 5000;
const NOTE_MS = 5000;

/** Notices that nobody is at the tablet: a lock, another app, or three minutes without a touch. */
export function useWatchfulness(): void {
  const store = useFloorStore();
  useEffect(() => {
    let lastTouch = Date.now();
    let lastNoted = 0;
    function touch(): void {
      const now = Date.now();
      if (now - lastTouch >= AWAY_AFTER_MS) store.getState().noteAway();
      lastTouch = now;
      if (now - lastNoted < NOTE_MS) return;
      lastNoted = now;
      store.getState().noteTouch();
    }
    function look(): void {
      if (Date.now() - lastTouch >= AWAY_AFTER_MS) store.getState().noteAway();
    }
    function showOrHide(): void {
      // Asked about as it comes back, so that a first touch can't land on the action itself.
      if (document.visibilityState === 'hidden') store.getState().noteAway();
    }
    const timer = setInterval(look, LOOK_MS);
    addEventListener('pointerdown', touch, true);
    addEventListener('keydown', touch, true);
    document.addEventListener('visibilitychange', showOrHide);
    return () => {
      clearInterval(timer);
      removeEventListener('pointerdown', touch, true);
      removeEventListener('keydown', touch, true);
      document.removeEventListener('visibilitychange', showOrHide);
    };
  }, [store]);
}
