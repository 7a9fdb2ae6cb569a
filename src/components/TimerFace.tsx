import { useId } from 'react';

export interface TimerFaceProps {
  /** What is timed, as "Watch from below". */
  label: string;
  secondsLeft: number;
  secondsInAll: number;
  /** Said under the figures, as "first look in 4 min". */
  words?: string | undefined;
  isRunning?: boolean | undefined;
}

const MINUTE = 60;

/** The time left in large figures over a line that fills up, a tick a minute. */
export function TimerFace({ label, secondsLeft, secondsInAll, words, isRunning = true }: TimerFaceProps) {
  const titleId = useId();
  const left = Math.max(0, Math.ceil(secondsLeft));
  const share = secondsInAll <= 0 ? 1 : Math.min(1, Math.max(0, 1 - secondsLeft / secondsInAll));
  const minutes = Math.floor(secondsInAll / MINUTE);
  const ticks = Array.from({ length: minutes + 1 }, (_, i) => (i * MINUTE * 100) / secondsInAll);
  return (
    <div className="timer" data-state={left === 0 ? 'over' : isRunning ? 'running' : 'waiting'}>
      <p className="form-label">{label}</p>
      <p className="timer-figures" role="timer" aria-label={`${label}: ${timeWords(left)} left`}>
        {clockText(left)}
      </p>
      <svg className="timer-line" role="img" aria-labelledby={titleId}>
        <title id={titleId}>{`${timeWords(secondsInAll - left)} of ${timeWords(secondsInAll)} gone`}</title>
        <line className="timer-asked" x1="0" x2="100%" y1="1.1rem" y2="1.1rem" />
        <rect className="fill-text" x="0" y="0.75rem" width={`${share * 100}%`} height="0.7rem" />
        {ticks.map((at, i) => (
          <line
            key={i}
            className="timer-tick"
            x1={`${at}%`}
            x2={`${at}%`}
            y1={i % 5 === 0 ? '0' : '0.5rem'}
            y2="1.7rem"
          />
        ))}
      </svg>
      {words !== undefined && <p className="timer-words">{words}</p>}
    </div>
  );
}

/** Seconds as a clock face shows them: "19:05". */
export function clockText(seconds: number): string {
  const whole = Math.max(0, Math.round(seconds));
  return `${Math.floor(whole / MINUTE)}:${String(whole % MINUTE).padStart(2, '0')}`;
}

function timeWords(seconds: number): string {
  const minutes = Math.floor(seconds / MINUTE);
  const rest = Math.round(seconds % MINUTE);
  if (minutes === 0) return `${rest} s`;
  return rest === 0 ? `${minutes} min` : `${minutes} min ${rest} s`;
}
