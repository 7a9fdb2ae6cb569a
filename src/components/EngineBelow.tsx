import { useEffect, useRef } from 'react';
import { CapRow, type CapRowBolt } from './CapRow';
import { CrankDial } from './CrankDial';
import { boltWords } from './bolt-words';

/** One rod as the engine drawing shows it. */
export interface EngineRod {
  rod: string;
  /** Bolts left to right as seen from below. */
  bolts: CapRowBolt[];
  /** The clearance on the cap, as text. */
  figure?: string | undefined;
  /** One or two short words at the right, as "marked". */
  words: string;
  /** A second, softer line, as "10:05". */
  note?: string | undefined;
  isInHand?: boolean | undefined;
}

export interface EngineBelowProps {
  /** Crankpins from the front; a vee engine has two rods on a pin. */
  pins: { pin: string; rods: EngineRod[] }[];
  /** Name of the bolt in hand. */
  inHand?: string | undefined;
  /** Where the crank stands, in degrees from pin 1 at the bottom. */
  crankAngle?: number | undefined;
  /** Makes each rod a target that can be touched. */
  onPick?: ((rod: string) => void) | undefined;
}

/** Draws the engine from below, front at the top: a row a rod, the rod in hand framed heavily. */
export function EngineBelow({ pins, inHand, crankAngle, onPick }: EngineBelowProps) {
  const rods = pins.reduce((count, { rods: onPin }) => count + onPin.length, 0);
  const isCompact = rods > 6;
  return (
    <section
      className="engine"
      aria-label="The engine from below, front at the top"
      data-compact={isCompact || undefined}
    >
      <div className="engine-top">
        <span className="engine-front">front</span>
        {crankAngle !== undefined && <CrankDial angle={crankAngle} />}
      </div>
      <ol className="engine-pins">
        {pins.map(({ pin, rods: onPin }) => (
          <li key={pin} className="engine-pin" data-shared={onPin.length > 1 || undefined}>
            <ol className="engine-rods" aria-label={onPin.length > 1 ? `Crankpin ${pin}` : undefined}>
              {onPin.map((rod) => (
                <RodRow key={rod.rod} {...rod} bolt={inHand} isCompact={isCompact} onPick={onPick} />
              ))}
            </ol>
          </li>
        ))}
      </ol>
    </section>
  );
}

type RodRowProps = EngineRod & {
  bolt: string | undefined;
  isCompact: boolean;
  onPick: ((rod: string) => void) | undefined;
};

function RodRow({ rod, bolts, figure, words, note, isInHand = false, bolt, isCompact, onPick }: RodRowProps) {
  const row = (
    <>
      <span className="engine-number">
        <span className="unseen">Rod </span>
        {rod}
      </span>
      <CapRow bolts={bolts} figure={figure} inHand={bolt} isCompact={isCompact} />
      <span className="unseen">
        {figure === undefined ? '. ' : `, clearance ${figure} mm. `}
        {bolts.map((each) => boltWords(each)).join('. ')}.{' '}
      </span>
      <span className="engine-words">
        <b>{words}</b>
        {note !== undefined && <span className="engine-note">{note}</span>}
      </span>
    </>
  );
  const item = useRef<HTMLLIElement>(null);
  useEffect(() => {
    // With large text the engine may be taller than its place; the rod in hand is then brought into sight.
    if (isInHand) item.current?.scrollIntoView({ block: 'nearest' });
  }, [isInHand]);
  return (
    <li
      ref={item}
      className="engine-rod"
      data-in-hand={isInHand || undefined}
      aria-current={isInHand ? 'step' : undefined}
    >
      {onPick === undefined ? (
        <div className="engine-row">{row}</div>
      ) : (
        <button type="button" className="engine-row is-touchable" onClick={() => onPick(rod)}>
          {row}
        </button>
      )}
    </li>
  );
}
