import { useId } from 'react';
import type { PlanLimit } from '@/domain/plan';
import { besideSI } from '@/domain/second-unit';
import { useRun } from './run-context';

const WIDTH = 380;
const FROM = 60;
const TO = 320;

/** A limit drawn as a band with its ends in figures, the target dotted, and the reading as a mark once it is kept. */
export function LimitBand({ limit, value }: { limit: PlanLimit; value?: string | undefined }) {
  const id = useId();
  const { low, high, target, unit } = limit;
  if (low === undefined && high === undefined) {
    return <p className="max-w-72 text-lg">No limit is known: {limit.missing ?? 'the supervisor judges'}.</p>;
  }
  const span = { from: Number(low ?? 0), to: Number(high ?? Number(low) * 2) };
  const at = (number: number) =>
    Math.min(WIDTH - 12, Math.max(12, FROM + ((number - span.from) / (span.to - span.from)) * (TO - FROM)));
  return (
    <figure className="w-full max-w-2xl">
      <svg className="drawing w-full" viewBox={`0 0 ${WIDTH} 92`} role="img" aria-labelledby={id}>
        <title id={id}>{`Allowed: ${low ?? 'no lower limit'} to ${high ?? 'no upper limit'} ${unit}`}</title>
        <rect
          className="scale-band"
          x={low === undefined ? 0 : FROM}
          y="10"
          width={(high === undefined ? WIDTH : TO) - (low === undefined ? 0 : FROM)}
          height="44"
        />
        <line className="line-thin" x1="0" x2={WIDTH} y1="32" y2="32" />
        {low !== undefined && <line className="scale-limit" x1={FROM} x2={FROM} y1="4" y2="60" />}
        {high !== undefined && <line className="scale-limit" x1={TO} x2={TO} y1="4" y2="60" />}
        {target !== undefined && (
          <line className="scale-target" x1={at(Number(target))} x2={at(Number(target))} y1="4" y2="60" />
        )}
        {value !== undefined && <circle className="reading-front" cx={at(Number(value))} cy="32" r="9" />}
        <text className="fill-text figure" fontSize="18" x={FROM} y="84" textAnchor="middle">
          {low ?? ''}
        </text>
        <text className="fill-text figure" fontSize="18" x={TO} y="84" textAnchor="middle">
          {high ?? ''}
        </text>
      </svg>
      <figcaption className="pt-1 text-2xl font-semibold">
        {limitWords(limit)}
        {target === undefined ? '' : `, target ${target}`}
        <LimitBeside limit={limit} />
      </figcaption>
    </figure>
  );
}

/** The same limits in the shop's other unit, where it shows one. */
function LimitBeside({ limit: { low, high, unit } }: { limit: PlanLimit }) {
  const { secondUnits } = useRun().workshop;
  const ends = [low, high].flatMap((end) =>
    end === undefined ? [] : (besideSI(secondUnits, end, unit) ?? []),
  );
  return ends.length === 0 ? null : <span className="block text-lg text-soft">{ends.join(' to ')}</span>;
}

/** What is allowed, in words. */
export function limitWords({ low, high, unit }: PlanLimit): string {
  if (low !== undefined && high !== undefined) return `allowed: ${low} to ${high} ${unit}`;
  return low === undefined ? `allowed: ${high ?? ''} ${unit} at most` : `allowed: ${low} ${unit} at least`;
}
