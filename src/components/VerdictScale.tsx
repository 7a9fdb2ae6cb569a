import { useId } from 'react';
import { placeOn, scaleSpan } from './scale-geometry';

export interface VerdictScaleProps {
  /** What the scale is of, for a screen reader, as "Rod 3 between tight and wide". */
  label: string;
  low?: { value: number; text: string } | undefined;
  high?: { value: number; text: string } | undefined;
  target?: number | undefined;
  /** What the two ends are called, as "tight" and "wide". */
  ends?: [string, string] | undefined;
  /** The readings; an open mark is the second one, as the rear end beside the front. */
  marks: { value: number; uncertainty?: number | undefined; isOpen?: boolean | undefined }[];
}

const WIDTH = 320;
const TOP = 22;
const BOTTOM = 58;

/** Where readings lie between their limits, small enough to stand beside the figures. */
export function VerdictScale({ label, low, high, target, ends, marks }: VerdictScaleProps) {
  const id = useId();
  const limits = [low?.value, high?.value, target].filter((value) => value !== undefined);
  const values = marks.flatMap(({ value, uncertainty = 0 }) => [value - uncertainty, value + uncertainty]);
  const span = scaleSpan(limits, values);
  const at = (value: number) => (placeOn(span, value) / 100) * WIDTH;
  const from = low === undefined ? 0 : at(low.value);
  const to = high === undefined ? WIDTH : at(high.value);
  const middle = (TOP + BOTTOM) / 2;
  return (
    <svg
      className="drawing verdict-scale"
      viewBox={`0 0 ${WIDTH} 84`}
      width={WIDTH}
      height="84"
      role="img"
      aria-labelledby={id}
    >
      <title id={id}>{label}</title>
      <rect className="scale-band" x={from} y={TOP} width={to - from} height={BOTTOM - TOP} />
      <line className="line-thin" x1="0" x2={WIDTH} y1={middle} y2={middle} />
      {target !== undefined && (
        <line className="scale-target" x1={at(target)} x2={at(target)} y1={TOP} y2={BOTTOM} />
      )}
      {[low, high].map((limit, i) =>
        limit === undefined ? null : (
          <g key={limit.text}>
            <line
              className="scale-limit"
              x1={at(limit.value)}
              x2={at(limit.value)}
              y1={TOP - 4}
              y2={BOTTOM + 4}
            />
            <text className="fill-text figure" fontSize="17" x={at(limit.value)} y="80" textAnchor="middle">
              {limit.text}
            </text>
            {ends && (
              <text
                className="fill-text"
                fontSize="17"
                x={at(limit.value)}
                y="14"
                textAnchor={i === 0 ? 'start' : 'end'}
              >
                {ends[i]}
              </text>
            )}
          </g>
        ),
      )}
      {marks.map(({ value, uncertainty, isOpen }, i) => {
        const y = marks.length === 1 ? middle : middle + (i === 0 ? -8 : 8);
        return (
          <g key={i}>
            {uncertainty !== undefined && (
              <line
                className="reading-whisker"
                x1={at(value - uncertainty)}
                x2={at(value + uncertainty)}
                y1={y}
                y2={y}
              />
            )}
            <circle
              className={isOpen === true ? 'reading-rear' : 'reading-front'}
              cx={at(value)}
              cy={y}
              r="7"
            />
          </g>
        );
      })}
    </svg>
  );
}
