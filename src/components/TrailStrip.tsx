import { memo, useId } from 'react';

export interface TrailStripProps {
  /** Entries in all. */
  total: number;
  /** The entry looked at, from 1. */
  position: number;
  /** Phases in order with their first and last entry; work may come back to one. */
  phases: { name: string; from: number; to: number }[];
  /** Signatures, each at its entry. */
  signatures: { at: number; words: string }[];
  /** Follows the scrubbing; without it the strip only shows. */
  onScrub?: ((position: number) => void) | undefined;
}

/** Under this share of the strip a phase's name would be cut to a letter or two, so it is left out. */
const SHARE_OF_A_NAME = 0.045;

/** The whole job as a strip of ticks, an entry each: phases named, signatures as ink rings, and a point to scrub along. */
export function TrailStrip(props: TrailStripProps) {
  const { total, position, phases, signatures, onScrub } = props;
  const titleId = useId();
  const tick = tickShare(total);
  // The middle of an entry's own tick, so that line and ring stand on it and not beside it.
  const onTick = (entry: number) => placeOf(entry - 1 + tick / 2, total);
  return (
    <div className="trail-strip">
      <svg className="trail-drawing" role="img" aria-labelledby={titleId}>
        <title id={titleId}>{stripWords(props)}</title>
        {phases.map((phase, i) => (
          <PhaseTicks
            key={phase.from}
            {...phase}
            total={total}
            // Only the phase that the point stands in changes while it is scrubbed along.
            position={Math.min(phase.to, Math.max(phase.from - 1, position))}
            tick={tick}
            height={0.6 + (i % 3) * 0.35}
          />
        ))}
        {signatures.map(({ at }) => (
          <g key={at} className="trail-signature" data-past={at <= position || undefined}>
            <line className="trail-stem" x1={onTick(at)} x2={onTick(at)} y1="1rem" y2="2.4rem" />
            <circle className="trail-ring" cx={onTick(at)} cy="0.6rem" r="0.42rem" />
          </g>
        ))}
        <line className="trail-position" x1={onTick(position)} x2={onTick(position)} y1="0" y2="2.6rem" />
        <PhaseNames phases={phases} total={total} />
      </svg>
      {onScrub !== undefined && (
        <input
          className="trail-scrub"
          type="range"
          min={1}
          max={Math.max(1, total)}
          value={position}
          aria-label="Entry"
          aria-valuetext={`entry ${position} of ${total}`}
          onChange={(event) => onScrub(Number(event.target.value))}
        />
      )}
    </div>
  );
}

function placeOf(entries: number, total: number): string {
  return `${total <= 0 ? 0 : Math.round((entries / total) * 100_000) / 1000}%`;
}

/** The part of an entry's place that its tick fills: half of it in a long job, a thin line in a short one. */
function tickShare(total: number): number {
  return Math.min(0.5, Math.max(0.0025, total / 400));
}

interface PhaseTicksProps {
  from: number;
  to: number;
  total: number;
  position: number;
  tick: number;
  height: number;
}

/** Ticks up to the present entry are dark, those after it faint; a dash pattern draws any number of them. */
const PhaseTicks = memo(function PhaseTicks({ from, to, total, position, tick, height }: PhaseTicksProps) {
  const y = `${2.4 - height / 2}rem`;
  const stretches = [
    { className: 'trail-ticks is-past', first: from, last: position },
    { className: 'trail-ticks', first: position + 1, last: to },
  ].filter(({ first, last }) => first <= last);
  const start = placeOf(from - 1, total);
  return (
    <>
      <line className="trail-start" x1={start} x2={start} y1="1rem" y2="2.4rem" />
      {stretches.map(({ className, first, last }) => (
        <line
          key={className}
          className={className}
          x1={placeOf(first - 1, total)}
          x2={placeOf(last, total)}
          y1={y}
          y2={y}
          strokeWidth={`${height}rem`}
          strokeDasharray={`${tick * 100} ${100 - tick * 100}`}
          pathLength={(last - first + 1) * 100}
        />
      ))}
    </>
  );
});

/** Names under their phases; one that is longer than its phase ends in dots. */
const PhaseNames = memo(function PhaseNames({ phases, total }: Pick<TrailStripProps, 'phases' | 'total'>) {
  return phases
    .filter(({ from, to }) => (to - from + 1) / total >= SHARE_OF_A_NAME)
    .map(({ name, from, to }) => (
      <foreignObject
        key={from}
        x={placeOf(from - 1, total)}
        y="2.7rem"
        width={placeOf(to - from + 1, total)}
        height="1.5rem"
      >
        <p className="trail-phase">{name}</p>
      </foreignObject>
    ));
});

function stripWords({ total, position, phases, signatures }: TrailStripProps): string {
  const named = phases.map(({ name, from, to }) => `${name}, entries ${from} to ${to}`);
  const signed = signatures.map(({ at, words }) => `${words} at entry ${at}`);
  return [`Entry ${position} of ${total}`, ...named, ...signed].join('. ');
}
