import { placeOn } from './scale-geometry';

/** The readings at one set value, each with how far it is off. */
export interface StripPoint {
  /** With its unit, as "20 N·m". */
  label: string;
  /** In %. */
  deviations: { percent: number; isWithin: boolean }[];
}

export interface DeviationStripProps {
  /** What it is of, for a screen reader. */
  label: string;
  /** How far a reading may be off, in ± %. */
  limitPercent: number;
  points: StripPoint[];
}

/** Readings between their ± limits, a line a set value: a dot is within, a cross is out. */
export function DeviationStrip({ label, limitPercent, points }: DeviationStripProps) {
  const largest = Math.max(
    0,
    ...points.flatMap(({ deviations }) => deviations.map(({ percent }) => Math.abs(percent))),
  );
  const end = Math.max(limitPercent * 1.35, Math.min(largest * 1.08, limitPercent * 4));
  const span = { from: -end, to: end };
  return (
    <figure className="deviation-strip" aria-label={label}>
      {points.map(({ label: words, deviations }) => (
        <div key={words} className="deviation-row">
          <span className="figure">{words}</span>
          <svg className="deviation-plot" aria-hidden="true">
            <rect
              className="scale-band"
              x={`${placeOn(span, -limitPercent)}%`}
              y="0"
              width={`${placeOn(span, limitPercent) - placeOn(span, -limitPercent)}%`}
              height="100%"
            />
            <line className="line-thin" x1="0" x2="100%" y1="50%" y2="50%" />
            <line className="deviation-zero" x1="50%" x2="50%" y1="0" y2="100%" />
            {[-limitPercent, limitPercent].map((limit) => (
              <line
                key={limit}
                className="scale-limit"
                x1={`${placeOn(span, limit)}%`}
                x2={`${placeOn(span, limit)}%`}
                y1="0"
                y2="100%"
              />
            ))}
            {deviations.map(({ percent, isWithin }, i) => (
              <svg key={i} className="deviation-mark" x={`${placeOn(span, percent)}%`} y="50%">
                {isWithin ? (
                  <circle className="deviation-dot" r="5" />
                ) : (
                  <path className="deviation-cross" d="M -6 -6 L 6 6 M 6 -6 L -6 6" />
                )}
              </svg>
            ))}
          </svg>
          <span className="figure deviation-worst">{worstWords(deviations)}</span>
        </div>
      ))}
      <div className="deviation-row" aria-hidden="true">
        <span />
        <svg className="deviation-foot">
          {[-limitPercent, 0, limitPercent].map((value) => (
            <text key={value} x={`${placeOn(span, value)}%`} y="1rem" textAnchor="middle">
              {value > 0 ? `+${value}` : String(value).replace('-', '−')} %
            </text>
          ))}
        </svg>
        <span />
      </div>
    </figure>
  );
}

function worstWords(deviations: StripPoint['deviations']): string {
  const [worst] = [...deviations].sort((a, b) => Math.abs(b.percent) - Math.abs(a.percent));
  if (worst === undefined) return '';
  const sign = worst.percent < 0 ? '−' : '+';
  return `${sign}${Math.abs(worst.percent).toFixed(1)} %`;
}
