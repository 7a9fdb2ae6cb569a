import { useEffect } from 'react';

/** Keeps the screen awake during a run where the browser can; a refusal is no error. */
export function useWakeLock(): void {
  useEffect(() => {
    let lock: WakeLockSentinel | undefined;
    let isGone = false;
    async function hold(): Promise<void> {
      if (document.visibilityState !== 'visible' || !('wakeLock' in navigator)) return;
      try {
        const held = await navigator.wakeLock.request('screen');
        if (isGone) await held.release();
        else lock = held;
      } catch {
        // A low battery or a policy may refuse it: the tablet then sleeps as it is set to, and nothing is lost.
      }
    }
    const again = () => void hold();
    void hold();
    document.addEventListener('visibilitychange', again);
    return () => {
      isGone = true;
      document.removeEventListener('visibilitychange', again);
      lock?.release().catch(() => undefined);
    };
  }, []);
}
