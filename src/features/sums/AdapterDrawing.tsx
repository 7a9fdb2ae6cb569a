interface AdapterDrawingProps {
  /** Degrees; what can't be drawn is drawn straight. */
  angle: number;
  /** The length or angle that is being keyed in, drawn strong. */
  at: string;
}

const WRENCH = 250;
const ADAPTER = 84;
const DRIVE = { x: 290, y: 92 };
const ARC = 52;

/** Where the three lengths and the angle are measured: hand, square drive, bolt. */
export function AdapterDrawing({ angle, at }: AdapterDrawingProps) {
  const degrees = Number.isFinite(angle) ? angle : 0;
  const along = at === 'wrench' ? 9 : 6;
  const out = at === 'adapter' ? 8 : 5;
  const bolt = from(DRIVE, degrees, ADAPTER);
  const hand = { x: DRIVE.x - WRENCH, y: DRIVE.y };
  const isDown = Math.sin(radians(degrees)) < 0;
  const beside = from(from(DRIVE, degrees, ADAPTER * 0.55), degrees + (isDown ? -90 : 90), 20);
  const arcEnd = from(DRIVE, degrees, ARC);
  const atArc = from(DRIVE, degrees / 2, ARC + 16);
  return (
    <svg
      className="sum-drawing"
      viewBox="10 0 400 140"
      role="img"
      aria-label={`A wrench of length L from the hand to the square drive, and from there an adapter of length E at ${degrees} degrees`}
    >
      <line x1={DRIVE.x} y1={DRIVE.y} x2={DRIVE.x + 92} y2={DRIVE.y} className="sum-dashed" />
      <line x1={hand.x} y1={hand.y} x2={DRIVE.x} y2={DRIVE.y} strokeWidth={along} />
      <line x1={DRIVE.x} y1={DRIVE.y} x2={bolt.x} y2={bolt.y} strokeWidth={out} />
      {Math.abs(degrees) >= 15 && Math.abs(degrees) < 180 && (
        <path
          d={`M ${DRIVE.x + ARC} ${DRIVE.y} A ${ARC} ${ARC} 0 0 ${isDown ? 1 : 0} ${arcEnd.x} ${arcEnd.y}`}
          strokeWidth={at === 'angle' ? 4 : 2}
        />
      )}
      <rect x={hand.x - 18} y={hand.y - 10} width="56" height="20" rx="10" className="sum-solid" />
      <rect x={DRIVE.x - 9} y={DRIVE.y - 9} width="18" height="18" className="sum-solid" />
      <polygon points={hexagon(bolt, 16)} className="sum-solid" />
      <text x={(hand.x + DRIVE.x) / 2 + 20} y={DRIVE.y - 16}>
        L
      </text>
      <text x={beside.x - 7} y={beside.y + 7}>
        E
      </text>
      {Math.abs(degrees) >= 15 && (
        <text x={atArc.x - 6} y={atArc.y + 7}>
          α
        </text>
      )}
    </svg>
  );
}

interface Point {
  x: number;
  y: number;
}

function radians(degrees: number): number {
  return (degrees * Math.PI) / 180;
}

/** A point so far off at so many degrees, counted upwards from straight ahead. */
function from({ x, y }: Point, degrees: number, distance: number): Point {
  const turn = radians(degrees);
  return { x: x + distance * Math.cos(turn), y: y - distance * Math.sin(turn) };
}

function hexagon(middle: Point, radius: number): string {
  return [0, 60, 120, 180, 240, 300]
    .map((degrees) => from(middle, degrees, radius))
    .map(({ x, y }) => `${x.toFixed(1)},${y.toFixed(1)}`)
    .join(' ');
}
