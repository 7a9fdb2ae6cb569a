import { BoltShape, type BoltState } from './BoltShape';

export interface CapRowBolt {
  name: string;
  state: BoltState;
  cycles: number;
  cyclesDone: number;
}

export interface CapRowProps {
  bolts: CapRowBolt[];
  /** The figure on the cap, such as "0.046". */
  figure?: string | undefined;
  /** Name of the bolt in hand. */
  inHand?: string | undefined;
  /** A lower drawing for engines with many rods. */
  isCompact?: boolean | undefined;
}

/** Draws a small cap with its bolts and a figure between them, for a row of the engine; the row says it in words. */
export function CapRow({ bolts, figure, inHand, isCompact = false }: CapRowProps) {
  const width = 168;
  const radius = isCompact ? 15 : 21;
  const height = isCompact ? 46 : 66;
  const middle = isCompact ? 26 : 37;
  const left = radius + 4;
  const right = width - radius - 4;
  const body = isCompact ? 15 : 24;
  return (
    <svg
      className="drawing cap-row"
      viewBox={`0 0 ${width} ${height}`}
      width={`${width / 16}rem`}
      height={`${height / 16}rem`}
      aria-hidden="true"
    >
      <rect
        className="cap-body"
        x={left}
        y={middle - body}
        width={right - left}
        height={body * 2}
        rx={body * 0.8}
      />
      {figure !== undefined && (
        <text className="cap-row-figure" x={width / 2} y={middle + 5.5} textAnchor="middle">
          {figure}
        </text>
      )}
      {bolts.map((bolt, i) => (
        <BoltShape
          key={bolt.name}
          {...bolt}
          centre={{
            x: bolts.length < 2 ? width / 2 : left + (i * (right - left)) / (bolts.length - 1),
            y: middle,
          }}
          radius={radius}
          isHeavy={bolt.name === inHand}
        />
      ))}
    </svg>
  );
}
