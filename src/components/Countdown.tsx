import { useEffect, useRef, useState } from 'react';
import { TimerFace } from './TimerFace';

export interface CountdownProps {
  label: string;
  /** When it ends, in ms since 1970, so that a reload or a locked screen changes nothing. */
  endsAtMs: number;
  secondsInAll: number;
  words?: string | undefined;
  /** Told once, when it ends while shown. */
  onEnd?: (() => void) | undefined;
  /** The clock; the device's own unless a test steps it. */
  now?: (() => number) | undefined;
}

const TICK_MS = 250;

/** Counts down to a moment and says when it is there. */
export function Countdown({ label, endsAtMs, secondsInAll, words, onEnd, now = Date.now }: CountdownProps) {
  const [leftMs, setLeft] = useState(() => endsAtMs - now());
  const told = useRef(leftMs <= 0);
  useEffect(() => {
    const timer = setInterval(() => {
      const left = endsAtMs - now();
      setLeft(left);
      if (left > 0 || told.current) return;
      told.current = true;
      onEnd?.();
    }, TICK_MS);
    return () => clearInterval(timer);
  }, [endsAtMs, now, onEnd]);
  return <TimerFace label={label} secondsLeft={leftMs / 1000} secondsInAll={secondsInAll} words={words} />;
}
