import { useId } from 'react';
import { BoltShape, type BoltState } from './BoltShape';
import { boltWords } from './bolt-words';

/** One of the two bolts of a cap, in the order seen from below, left to right. */
export interface CapBolt {
  /** The full name, as "4B". */
  name: string;
  /** The letter under the drawing, as "B". */
  letter: string;
  state: BoltState;
  cycles: number;
  cyclesDone: number;
}

export interface CapDrawingProps {
  rod: string;
  bolts: CapBolt[];
  /** Names of the bolts in hand: drawn heavily, their letters large. */
  inHand?: readonly string[] | undefined;
  /** Degrees asked of the bolt in hand; negative is a release. */
  targetAngle?: number | undefined;
  /** Which way it goes where no angle is asked, as for a torque. */
  turn?: 'tighten' | 'release' | undefined;
  turnedAngle?: number | undefined;
  /** The paint mark is what is asked for now. */
  isMarkAsked?: boolean | undefined;
  /** A figure written on the cap, such as its clearance. */
  figure?: string | undefined;
}

const WIDTH = 330;
const HEIGHT = 196;
const MIDDLE = 86;
const RING = 34;
const ARC_RATIO = 1.9;

/** Draws the cap in hand from below with its bolts, the one to turn heavily and the angle as an arc around it. */
export function CapDrawing(props: CapDrawingProps) {
  const { bolts, inHand, targetAngle, turn, turnedAngle, isMarkAsked } = props;
  const titleId = useId();
  const centres = boltCentres(bolts.length);
  const radius = bolts.length > 2 ? (RING * 2) / bolts.length : RING;
  return (
    <svg
      className="drawing cap-drawing"
      viewBox={`0 0 ${WIDTH} ${HEIGHT}`}
      width={`${WIDTH / 16}rem`}
      height={`${HEIGHT / 16}rem`}
      role="img"
      aria-labelledby={titleId}
    >
      <title id={titleId}>{capWords(props)}</title>
      <path className="cap-body" d={capPath(centres[0] ?? WIDTH / 2, centres.at(-1) ?? WIDTH / 2)} />
      <CapWords {...props} />
      {bolts.map((bolt, i) => {
        const x = centres[i] ?? WIDTH / 2;
        const isInHand = inHand?.includes(bolt.name) === true;
        return (
          <g key={bolt.name}>
            <BoltShape
              {...bolt}
              centre={{ x, y: MIDDLE }}
              radius={radius}
              isHeavy={isInHand}
              arcRatio={ARC_RATIO}
              {...(isInHand ? { targetAngle, turn, turnedAngle, isMarkAsked } : {})}
            />
            <text
              className={isInHand ? 'cap-letter is-in-hand' : 'cap-letter'}
              x={x}
              y={MIDDLE + 94}
              textAnchor="middle"
            >
              {bolt.letter}
            </text>
          </g>
        );
      })}
    </svg>
  );
}

/** The rod's number, and a figure, between two bolts; the bolts themselves fill a cap with one or many. */
function CapWords({ rod, bolts, figure }: CapDrawingProps) {
  if (bolts.length !== 2) return null;
  return (
    <>
      <text
        className="cap-rod"
        x={WIDTH / 2}
        y={MIDDLE + (figure === undefined ? 13 : 2)}
        textAnchor="middle"
      >
        {rod}
      </text>
      {figure !== undefined && (
        <text className="cap-figure" x={WIDTH / 2} y={MIDDLE + 25} textAnchor="middle">
          {figure}
        </text>
      )}
    </>
  );
}

function boltCentres(count: number): number[] {
  const left = 72;
  const right = WIDTH - 72;
  if (count <= 1) return [WIDTH / 2];
  return Array.from({ length: count }, (_, i) => left + (i * (right - left)) / (count - 1));
}

/** The outline of a cap from below: a bridge between two bosses. */
function capPath(left: number, right: number): string {
  const waist = 36;
  const boss = 46;
  if (left === right) {
    return `M ${left - boss} ${MIDDLE} a ${boss} ${boss} 0 1 1 ${boss * 2} 0 a ${boss} ${boss} 0 1 1 ${-boss * 2} 0 Z`;
  }
  return [
    `M ${left} ${MIDDLE - boss}`,
    `C ${left + 40} ${MIDDLE - boss}, ${left + 36} ${MIDDLE - waist}, ${left + 62} ${MIDDLE - waist}`,
    `L ${right - 62} ${MIDDLE - waist}`,
    `C ${right - 36} ${MIDDLE - waist}, ${right - 40} ${MIDDLE - boss}, ${right} ${MIDDLE - boss}`,
    `A ${boss} ${boss} 0 0 1 ${right} ${MIDDLE + boss}`,
    `C ${right - 40} ${MIDDLE + boss}, ${right - 36} ${MIDDLE + waist}, ${right - 62} ${MIDDLE + waist}`,
    `L ${left + 62} ${MIDDLE + waist}`,
    `C ${left + 36} ${MIDDLE + waist}, ${left + 40} ${MIDDLE + boss}, ${left} ${MIDDLE + boss}`,
    `A ${boss} ${boss} 0 0 1 ${left} ${MIDDLE - boss} Z`,
  ].join(' ');
}

function capWords({
  rod,
  bolts,
  inHand,
  targetAngle,
  turn,
  turnedAngle,
  isMarkAsked,
}: CapDrawingProps): string {
  const each = bolts.map((bolt) =>
    boltWords(inHand?.includes(bolt.name) ? { ...bolt, targetAngle, turn, turnedAngle } : bolt),
  );
  const hand = inHand === undefined ? [] : [`${isMarkAsked ? 'mark' : 'in hand'} ${inHand.join(' and ')}`];
  return [`Cap of rod ${rod} from below`, ...hand, ...each].join('. ');
}
