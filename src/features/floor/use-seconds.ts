import { useEffect, useState } from 'react';

const SECOND = 1000;

/** The time in milliseconds, read again every second while it is asked for. */
export function useSeconds(now: () => number, isRunning: boolean): number {
  const [time, setTime] = useState(now);
  useEffect(() => {
    if (!isRunning) return;
    const timer = setInterval(() => setTime(now()), SECOND);
    return () => clearInterval(timer);
  }, [now, isRunning]);
  return time;
}
