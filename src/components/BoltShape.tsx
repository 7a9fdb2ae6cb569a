import { arcPath, arrowPath, dotPoints, hexagonPoints, type Point } from './bolt-geometry';

/** How far a bolt is: each state differs in shape, not in colour alone. */
export type BoltState = 'waiting' | 'running' | 'marked' | 'condemned';

export interface BoltShapeProps {
  centre: Point;
  /** Radius of the washer ring, in units of the drawing. */
  radius: number;
  state: BoltState;
  cycles: number;
  cyclesDone: number;
  /** Drawn heavily: the bolt in hand. Left out, a running bolt is. */
  isHeavy?: boolean | undefined;
  /** Degrees asked for, drawn dotted outside the ring; negative turns back. */
  targetAngle?: number | undefined;
  /** Which way it goes where no angle is asked, as for a torque: a short dotted arc. */
  turn?: 'tighten' | 'release' | undefined;
  /** Degrees turned, drawn solid. */
  turnedAngle?: number | undefined;
  /** Radius of the arc as a multiple of the ring's. */
  arcRatio?: number | undefined;
  /** The stripe asked for next, drawn dotted. */
  isMarkAsked?: boolean | undefined;
}

/** Draws one bolt head from above into a larger SVG; it has no name of its own there. */
export function BoltShape(props: BoltShapeProps) {
  const {
    centre,
    radius,
    state,
    cycles,
    cyclesDone,
    isHeavy = state === 'running',
    isMarkAsked = false,
  } = props;
  const hexWidth = Math.max(1.5, radius * (isHeavy ? 0.16 : 0.075));
  return (
    <g className="bolt" data-state={state}>
      <circle
        className="bolt-ring"
        cx={centre.x}
        cy={centre.y}
        r={radius}
        strokeWidth={Math.max(1, radius * 0.05)}
      />
      <polygon className="bolt-head" points={hexagonPoints(centre, radius * 0.74)} strokeWidth={hexWidth} />
      {state === 'condemned' ? (
        <CondemnedCross centre={centre} radius={radius} />
      ) : (
        <CycleDots centre={centre} radius={radius} cycles={cycles} cyclesDone={cyclesDone} />
      )}
      <TurnArc {...props} />
      {state === 'marked' && <Stripe centre={centre} radius={radius} className="paint" />}
      {isMarkAsked && state !== 'marked' && (
        <Stripe centre={centre} radius={radius} className="paint-asked" />
      )}
    </g>
  );
}

function CycleDots({
  centre,
  radius,
  cycles,
  cyclesDone,
}: Pick<BoltShapeProps, 'centre' | 'radius' | 'cycles' | 'cyclesDone'>) {
  const dot = radius * (cycles > 3 ? 0.105 : 0.13);
  return dotPoints(centre, radius, cycles).map((point, i) => (
    <circle
      key={i}
      className={i < cyclesDone ? 'bolt-dot is-done' : 'bolt-dot'}
      cx={point.x}
      cy={point.y}
      r={dot}
      strokeWidth={Math.max(0.9, radius * 0.045)}
    />
  ));
}

function CondemnedCross({ centre, radius }: { centre: Point; radius: number }) {
  const arm = radius * 0.86;
  const { x, y } = centre;
  return (
    <path
      className="bolt-cross"
      d={`M ${x - arm} ${y - arm} L ${x + arm} ${y + arm} M ${x + arm} ${y - arm} L ${x - arm} ${y + arm}`}
      strokeWidth={Math.max(2.2, radius * 0.17)}
    />
  );
}

/** How much of an arc says a direction and no angle. */
const DIRECTION = { tighten: 55, release: -55 };

function TurnArc({ centre, radius, targetAngle, turn, turnedAngle, arcRatio = 1.34 }: BoltShapeProps) {
  const arc = radius * arcRatio;
  const asked = targetAngle ?? (turn === undefined ? 0 : DIRECTION[turn]);
  const width = Math.max(1.6, radius * 0.085);
  return (
    <>
      {asked !== 0 && (
        <>
          <path
            className="turn-target"
            d={arcPath(centre, arc, asked)}
            strokeWidth={width}
            strokeDasharray={`${width * 0.1} ${width * 1.9}`}
          />
          <path className="turn-arrow" d={arrowPath(centre, arc, asked, width * 4)} strokeWidth={width} />
        </>
      )}
      {turnedAngle !== undefined && turnedAngle !== 0 && (
        <path className="turn-done" d={arcPath(centre, arc, turnedAngle)} strokeWidth={width * 1.5} />
      )}
    </>
  );
}

function Stripe({ centre, radius, className }: { centre: Point; radius: number; className: string }) {
  const width = radius * 0.3;
  return (
    <rect
      className={className}
      x={centre.x - width / 2}
      y={centre.y - radius * 1.42}
      width={width}
      height={radius * 1.2}
      transform={`rotate(14 ${centre.x} ${centre.y})`}
      strokeWidth={Math.max(0.8, radius * (className === 'paint' ? 0.04 : 0.065))}
    />
  );
}
