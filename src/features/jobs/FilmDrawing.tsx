interface FilmDrawingProps {
  /** Thinnest film over radial clearance, and degrees from the load to it. */
  ratio: number;
  angle: number;
}

const SHELL = 44;
const PIN = 32;

/** The pin in its bearing, the gap drawn many times too wide: where the film is thinnest under a load from above. */
export function FilmDrawing({ ratio, angle }: FilmDrawingProps) {
  const off = (SHELL - PIN) * (1 - ratio);
  const turn = ((90 + angle) * Math.PI) / 180;
  const pin = { x: 60 + off * Math.cos(turn), y: 60 + off * Math.sin(turn) };
  return (
    <svg className="film-drawing" viewBox="0 0 120 120" aria-hidden="true">
      <circle cx="60" cy="60" r={SHELL} className="film-oil" />
      <circle cx={pin.x} cy={pin.y} r={PIN} className="film-pin" />
      <line
        x1={60 + (SHELL - 10) * Math.cos(turn)}
        y1={60 + (SHELL - 10) * Math.sin(turn)}
        x2={60 + (SHELL + 9) * Math.cos(turn)}
        y2={60 + (SHELL + 9) * Math.sin(turn)}
        className="film-place"
      />
      <path d="M60 2 V12 M56 8 L60 13 L64 8" className="film-load" />
    </svg>
  );
}
