import { placeOn, scaleSpan } from './scale-geometry';

/** One reading of one end of a crankpin. */
export interface ScaleReading {
  /** Where it lies. */
  value: number;
  /** How it is written, with its own digits. */
  text: string;
  /** Half the width of the whisker. */
  uncertainty: number;
}

export interface ClearanceScaleProps {
  /** Limits and target as text with their value; a missing limit is not drawn. */
  low?: { value: number; text: string } | undefined;
  high?: { value: number; text: string } | undefined;
  target?: { value: number; text: string } | undefined;
  unit: string;
  rods: {
    rod: string;
    front?: ScaleReading | undefined;
    rear?: ScaleReading | undefined;
    isInHand?: boolean | undefined;
    /** What stands at the right when nothing is read yet. */
    words?: string | undefined;
  }[];
}

interface Span {
  from: number;
  to: number;
}

/** All rods on one scale between tight and wide, so that the odd one shows: front solid, rear open, whiskers for how sure. */
export function ClearanceScale({ low, high, target, unit, rods }: ClearanceScaleProps) {
  const readings = rods
    .flatMap(({ front, rear }) => [front, rear])
    .filter((reading) => reading !== undefined);
  const ends = readings.flatMap(({ value, uncertainty }) => [value - uncertainty, value + uncertainty]);
  const limits = [low, high, target].filter((limit) => limit !== undefined).map(({ value }) => value);
  const span = scaleSpan(limits, ends.length > 0 || limits.length > 0 ? ends : [0, 1]);
  const marks = { low: low?.value, high: high?.value, target: target?.value };
  return (
    <figure
      className="clearance"
      aria-label={`Oil clearance of every rod in ${unit}, between tight and wide`}
    >
      <div className="clearance-row is-head" aria-hidden="true">
        <span />
        <span className="clearance-plot">
          <ScaleWords span={span} at={low?.value} anchor="end" words="tight" />
          <ScaleWords span={span} at={high?.value} anchor="start" words="wide" />
        </span>
        <span className="figure">{unit}</span>
      </div>
      <ol>
        {rods.map((rod) => (
          <li key={rod.rod} className="clearance-row" data-in-hand={rod.isInHand === true || undefined}>
            <span className="clearance-rod">
              <span className="unseen">Rod </span>
              {rod.rod}
            </span>
            <RodPlot span={span} marks={marks} front={rod.front} rear={rod.rear} />
            <RodFigures {...rod} />
          </li>
        ))}
      </ol>
      <div className="clearance-row is-foot">
        <span />
        <span className="clearance-plot">
          <ScaleWords span={span} at={low?.value} anchor="middle" words={low?.text} isFigure />
          <ScaleWords
            span={span}
            at={target?.value}
            anchor="middle"
            words={target === undefined ? undefined : 'target'}
          />
          <ScaleWords span={span} at={high?.value} anchor="middle" words={high?.text} isFigure />
        </span>
        <span />
      </div>
      <figcaption className="clearance-key">
        <svg viewBox="0 0 14 14" aria-hidden="true">
          <circle className="fill-text" cx="7" cy="7" r="5.5" />
        </svg>
        front
        <svg viewBox="0 0 14 14" aria-hidden="true">
          <circle className="reading-rear" cx="7" cy="7" r="5" />
        </svg>
        rear
        <svg viewBox="0 0 26 14" aria-hidden="true">
          <path className="line-text" strokeWidth="2" d="M 1 7 L 25 7 M 1 3 L 1 11 M 25 3 L 25 11" />
        </svg>
        how sure
      </figcaption>
    </figure>
  );
}

function RodPlot({
  span,
  marks,
  front,
  rear,
}: {
  span: Span;
  marks: Record<'low' | 'high' | 'target', number | undefined>;
  front?: ScaleReading | undefined;
  rear?: ScaleReading | undefined;
}) {
  const from = marks.low === undefined ? 0 : placeOn(span, marks.low);
  const to = marks.high === undefined ? 100 : placeOn(span, marks.high);
  return (
    <svg className="clearance-plot" aria-hidden="true">
      <rect className="scale-band" x={`${from}%`} y="-1" width={`${to - from}%`} height="103%" />
      <line className="line-thin" x1="0" x2="100%" y1="50%" y2="50%" />
      {marks.target !== undefined && (
        <line
          className="scale-target"
          x1={`${placeOn(span, marks.target)}%`}
          x2={`${placeOn(span, marks.target)}%`}
          y1="0"
          y2="100%"
        />
      )}
      {[marks.low, marks.high].map((limit, i) =>
        limit === undefined ? null : (
          <line
            key={i}
            className="scale-limit"
            x1={`${placeOn(span, limit)}%`}
            x2={`${placeOn(span, limit)}%`}
            y1="-1"
            y2="103%"
          />
        ),
      )}
      {front !== undefined && <ReadingMark span={span} reading={front} y="34%" className="reading-front" />}
      {rear !== undefined && <ReadingMark span={span} reading={rear} y="66%" className="reading-rear" />}
    </svg>
  );
}

function ReadingMark({
  span,
  reading,
  y,
  className,
}: {
  span: Span;
  reading: ScaleReading;
  y: string;
  className: string;
}) {
  const { value, uncertainty } = reading;
  return (
    <>
      <line
        className="reading-whisker"
        x1={`${placeOn(span, value - uncertainty)}%`}
        x2={`${placeOn(span, value + uncertainty)}%`}
        y1={y}
        y2={y}
      />
      <circle className={className} cx={`${placeOn(span, value)}%`} cy={y} r="0.46rem" />
    </>
  );
}

function ScaleWords({
  span,
  at,
  anchor,
  words,
  isFigure = false,
}: {
  span: Span;
  at: number | undefined;
  anchor: 'start' | 'middle' | 'end';
  words: string | undefined;
  isFigure?: boolean;
}) {
  if (at === undefined || words === undefined) return null;
  const dx = { start: 8, middle: 0, end: -8 }[anchor];
  return (
    <svg className="clearance-words">
      <text
        className={isFigure ? 'is-figure' : undefined}
        x={`${placeOn(span, at)}%`}
        dx={dx}
        y="1.05rem"
        textAnchor={anchor}
      >
        {words}
      </text>
    </svg>
  );
}

function RodFigures({
  front,
  rear,
  words,
}: {
  front?: ScaleReading | undefined;
  rear?: ScaleReading | undefined;
  words?: string | undefined;
}) {
  if (front === undefined && rear === undefined)
    return <span className="clearance-figures is-waiting">{words ?? 'waiting'}</span>;
  return (
    <span className="clearance-figures figure">
      {[
        { end: 'front', reading: front },
        { end: 'rear', reading: rear },
      ].map(({ end, reading }) => (
        <span key={end}>
          <span className="unseen">{end} </span>
          {reading?.text ?? '–'}
          <span className="unseen">
            {reading === undefined ? '' : ` plus or minus ${reading.uncertainty}`}
          </span>
        </span>
      ))}
    </span>
  );
}
