import { useId } from 'react';
import { BoltShape, type BoltState } from './BoltShape';
import { boltWords } from './bolt-words';

export interface BoltGlyphProps {
  /** The bolt's name, as "4B". */
  name: string;
  state: BoltState;
  cycles: number;
  cyclesDone: number;
  /** Radius of the washer ring in px: 11 in a list, 22 in a row, 44 on the Floor. */
  radius?: number | undefined;
  isHeavy?: boolean | undefined;
  targetAngle?: number | undefined;
  turnedAngle?: number | undefined;
  isMarkAsked?: boolean | undefined;
  /** Left out of what a screen reader says, where the words stand beside it. */
  isDecorative?: boolean | undefined;
}

/** The one glyph for the state of a tightening: a bolt head from above, its cycles as dots and its paint mark. */
export function BoltGlyph({ radius = 22, isDecorative = false, ...bolt }: BoltGlyphProps) {
  const titleId = useId();
  const half = Math.round(radius * 1.56 * 100) / 100;
  const size = half * 2;
  const role = isDecorative ? { 'aria-hidden': true } : { role: 'img', 'aria-labelledby': titleId };
  return (
    <svg
      className="drawing"
      width={`${size / 16}rem`}
      height={`${size / 16}rem`}
      viewBox={`0 0 ${size} ${size}`}
      {...role}
    >
      {!isDecorative && <title id={titleId}>{boltWords(bolt)}</title>}
      <BoltShape centre={{ x: half, y: half }} radius={radius} {...bolt} />
    </svg>
  );
}
