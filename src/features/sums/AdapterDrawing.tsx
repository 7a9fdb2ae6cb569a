interface AdapterDrawingProps {
  /** Degrees; what can't be drawn is drawn straight. */
  angle: number;
  /** The length or angle that is being keyed in, drawn strong. */
  at: string;
}

const WRENCH = 250;
const ADAPTER = 70;
const DRIVE = { x: 300, y: 74 };

/** Where the three lengths and the angle are measured: hand, square drive, bolt. */
export function AdapterDrawing({ angle, at }: AdapterDrawingProps) {
  const turn = Number.isFinite(angle) ? (angle * Math.PI) / 180 : 0;
  const bolt = { x: DRIVE.x + ADAPTER * Math.cos(turn), y: DRIVE.y - ADAPTER * Math.sin(turn) };
  const hand = { x: DRIVE.x - WRENCH, y: DRIVE.y };
  const strong = (name: string) => (at === name ? 5 : 2);
  return (
    <svg
      className="sum-drawing"
      viewBox="0 0 400 150"
      role="img"
      aria-label={`A wrench of length L from the hand to the square drive, and from there an adapter of length E at ${Number.isFinite(angle) ? angle : 0} degrees`}
    >
      <line x1={DRIVE.x} y1={DRIVE.y} x2={DRIVE.x + 84} y2={DRIVE.y} className="sum-dashed" />
      <line x1={hand.x} y1={hand.y} x2={DRIVE.x} y2={DRIVE.y} strokeWidth={strong('wrench') + 6} />
      <line x1={DRIVE.x} y1={DRIVE.y} x2={bolt.x} y2={bolt.y} strokeWidth={strong('adapter') + 3} />
      <rect x={hand.x - 18} y={hand.y - 9} width="52" height="18" rx="9" className="sum-solid" />
      <rect x={DRIVE.x - 8} y={DRIVE.y - 8} width="16" height="16" className="sum-solid" strokeWidth="2" />
      <polygon points={hexagon(bolt, 15)} className="sum-solid" strokeWidth={strong('target')} />
      <text x={(hand.x + DRIVE.x) / 2} y={DRIVE.y + 32}>
        L
      </text>
      <text x={(DRIVE.x + bolt.x) / 2 - 14} y={(DRIVE.y + bolt.y) / 2 + (turn > 0.4 ? 4 : 28)}>
        E
      </text>
      <text
        x={DRIVE.x + 56}
        y={DRIVE.y + (Math.sin(turn) >= 0 ? 26 : -14)}
        opacity={at === 'angle' ? 1 : 0.8}
      >
        α
      </text>
    </svg>
  );
}

function hexagon({ x, y }: { x: number; y: number }, radius: number): string {
  return [0, 60, 120, 180, 240, 300]
    .map((degrees) => {
      const turn = (degrees * Math.PI) / 180;
      return `${(x + radius * Math.cos(turn)).toFixed(1)},${(y + radius * Math.sin(turn)).toFixed(1)}`;
    })
    .join(' ');
}
