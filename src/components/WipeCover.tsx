import { Countdown } from './Countdown';

export interface WipeCoverProps {
  /** When touch comes back, in ms since 1970. */
  endsAtMs: number;
  secondsInAll: number;
  onEnd: () => void;
  /** The clock; the device's own unless a test steps it. */
  now?: (() => number) | undefined;
}

/** Covers the whole screen while it is wiped: every touch lands here and does nothing, until the time is over. */
export function WipeCover({ endsAtMs, secondsInAll, onEnd, now }: WipeCoverProps) {
  return (
    <div className="wipe-cover" role="status">
      <p className="floor-step">Wipe the screen now</p>
      <Countdown
        label="Touch is off for"
        endsAtMs={endsAtMs}
        secondsInAll={secondsInAll}
        onEnd={onEnd}
        now={now}
      />
    </div>
  );
}
