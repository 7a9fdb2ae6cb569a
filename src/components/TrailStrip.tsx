import { useId } from 'react';

export interface TrailStripProps {
  /** Entries in all. */
  total: number;
  /** The entry looked at, from 1. */
  position: number;
  /** Phases in order with their first and last entry. */
  phases: { name: string; from: number; to: number }[];
  /** Signatures, each at its entry. */
  signatures: { at: number; words: string }[];
  /** Follows the scrubbing; without it the strip only shows. */
  onScrub?: ((position: number) => void) | undefined;
}

/** The whole job as a strip of ticks, an entry each: phases named, signatures as ink rings, and a point to scrub along. */
export function TrailStrip({ total, position, phases, signatures, onScrub }: TrailStripProps) {
  const titleId = useId();
  const at = (entry: number) => `${total <= 0 ? 0 : Math.round((entry / total) * 10_000) / 100}%`;
  return (
    <div className="trail-strip">
      <svg className="trail-drawing" role="img" aria-labelledby={titleId}>
        <title id={titleId}>{stripWords({ total, position, phases, signatures })}</title>
        {phases.map((phase, i) => (
          <PhaseTicks key={phase.name} {...phase} position={position} at={at} height={0.6 + (i % 3) * 0.35} />
        ))}
        {signatures.map((signature) => (
          <g key={signature.at}>
            <line className="trail-stem" x1={at(signature.at)} x2={at(signature.at)} y1="1rem" y2="2.4rem" />
            <circle className="trail-ring" cx={at(signature.at)} cy="0.6rem" r="0.42rem" />
          </g>
        ))}
        <line className="trail-position" x1={at(position)} x2={at(position)} y1="0" y2="2.6rem" />
        {phases.map(({ name, from, to }) => (
          <svg key={name} x={at(from - 1)} y="2.7rem" width={at(to - from + 1)} height="1.4rem">
            <text className="trail-phase" x="0.4rem" y="1rem">
              {name}
            </text>
          </svg>
        ))}
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

interface PhaseTicksProps {
  from: number;
  to: number;
  position: number;
  height: number;
  at: (entry: number) => string;
}

/** Ticks up to the present entry are dark, those after it faint; a dash pattern draws any number of them. */
function PhaseTicks({ from, to, position, height, at }: PhaseTicksProps) {
  const y = `${2.4 - height / 2}rem`;
  const stretches = [
    { className: 'trail-ticks is-past', first: from, last: Math.min(to, position) },
    { className: 'trail-ticks', first: Math.max(from, position + 1), last: to },
  ].filter(({ first, last }) => first <= last);
  return (
    <>
      <line className="trail-start" x1={at(from - 1)} x2={at(from - 1)} y1="1rem" y2="2.4rem" />
      {stretches.map(({ className, first, last }) => (
        <line
          key={className}
          className={className}
          x1={at(first - 1)}
          x2={at(last)}
          y1={y}
          y2={y}
          strokeWidth={`${height}rem`}
          pathLength={(last - first + 1) * 2}
        />
      ))}
    </>
  );
}

function stripWords({ total, position, phases, signatures }: TrailStripProps): string {
  const named = phases.map(({ name, from, to }) => `${name}, entries ${from} to ${to}`);
  const signed = signatures.map(({ at, words }) => `${words} at entry ${at}`);
  return [`Entry ${position} of ${total}`, ...named, ...signed].join('. ');
}
