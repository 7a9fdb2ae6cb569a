import { useId } from 'react';

export interface WarmUpLineProps {
  /** What is drawn, as "Coolant temperature". */
  label: string;
  unit: string;
  /** Readings in order of time. */
  points: { minute: number; value: number }[];
  minutesInAll: number;
  low: number;
  high: number;
  /** Fully warm, drawn dotted. */
  target?: number | undefined;
}

/** The warm-up as a line: what was read and when, the target dotted, what is still to come open. */
export function WarmUpLine({ label, unit, points, minutesInAll, low, high, target }: WarmUpLineProps) {
  const titleId = useId();
  const x = (minute: number) => `${Math.round((minute / minutesInAll) * 10_000) / 100}%`;
  const y = (value: number) => `${Math.round((1 - (value - low) / (high - low)) * 10_000) / 100}%`;
  const last = points.at(-1);
  const minutes = Array.from({ length: Math.floor(minutesInAll / 5) + 1 }, (_, i) => i * 5);
  return (
    <figure className="warm-up">
      <figcaption className="form-label">
        {label}, {unit}
      </figcaption>
      <div className="warm-up-drawing">
        <svg role="img" aria-labelledby={titleId}>
          <title id={titleId}>{lineWords({ label, unit, points, target })}</title>
          {minutes.map((minute) => (
            <line key={minute} className="line-thin" x1={x(minute)} x2={x(minute)} y1="0" y2="100%" />
          ))}
          {target !== undefined && (
            <line className="scale-target" x1="0" x2="100%" y1={y(target)} y2={y(target)} />
          )}
          {minutes.map((minute) => (
            <text
              key={minute}
              className="warm-up-minute"
              x={x(minute)}
              y="100%"
              dy="1.35rem"
              textAnchor="middle"
            >
              {minute === minutes.at(-1) ? `${minute} min` : minute}
            </text>
          ))}
          {target !== undefined && (
            <text className="warm-up-minute" x="100%" y={y(target)} dx="0.5rem" dy="0.35rem">
              {target}
            </text>
          )}
          {points.slice(1).map((point, i) => {
            const before = points[i] ?? point;
            return (
              <line
                key={point.minute}
                className="warm-up-line"
                x1={x(before.minute)}
                y1={y(before.value)}
                x2={x(point.minute)}
                y2={y(point.value)}
              />
            );
          })}
          {points.map((point) => (
            <circle
              key={point.minute}
              className="reading-front"
              cx={x(point.minute)}
              cy={y(point.value)}
              r="0.3rem"
            />
          ))}
          {last !== undefined && (
            <text className="warm-up-last" x={x(last.minute)} y={y(last.value)} dx="0.6rem" dy="1.4rem">
              {last.value}
            </text>
          )}
        </svg>
      </div>
    </figure>
  );
}

function lineWords({
  label,
  unit,
  points,
  target,
}: Pick<WarmUpLineProps, 'label' | 'unit' | 'points' | 'target'>): string {
  const read = points.map(({ minute, value }) => `${value} ${unit} at ${minute} min`);
  const asked = target === undefined ? [] : [`target ${target} ${unit}`];
  return [label, ...asked, ...(read.length > 0 ? read : ['nothing read yet'])].join(', ');
}
