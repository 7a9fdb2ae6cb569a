/** A point that a curve goes through. */
export interface Knot {
  x: number;
  y: number;
}

interface Piece {
  from: Knot;
  to: Knot;
  width: number;
  slope: number;
}

/**
 * The smooth curve through two knots or more (x rising) that neither overshoots nor turns where the knots don't:
 * piecewise cubic. Refuses what lies beyond the ends. Source: Fritsch and Carlson 1980, with the slopes of
 * Fritsch and Butland 1984.
 */
export function valueOnCurve(knots: readonly Knot[], x: number): number {
  const pieces = piecesOf(knots);
  const at = pieces.findIndex(({ from, to }) => from.x <= x && x <= to.x);
  const piece = pieces[at];
  if (piece === undefined) throw new RangeError('The place lies beyond the ends of the curve.');
  const { from, to, width, slope } = piece;
  const start = slopeBetween(pieces[at - 1], piece);
  const end = slopeBetween(piece, pieces[at + 1]);
  const t = (x - from.x) / width;
  // Hermite's cubic, written so that both ends are met exactly.
  const bend = (start - slope) * (1 - t) - (end - slope) * t;
  return from.y * (1 - t) + to.y * t + width * t * (1 - t) * bend;
}

function piecesOf(knots: readonly Knot[]): Piece[] {
  const pieces = knots.slice(1).flatMap((to, index) => {
    const from = knots[index];
    if (from === undefined) return [];
    const width = to.x - from.x;
    if (!(width > 0)) throw new RangeError('The places of a curve must rise.');
    return [{ from, to, width, slope: (to.y - from.y) / width }];
  });
  if (pieces.length === 0) throw new RangeError('A curve needs two places or more.');
  return pieces;
}

/** The slope at the knot between two pieces: a weighted harmonic mean; level where the knots turn. */
function slopeBetween(left: Piece | undefined, right: Piece | undefined): number {
  if (left === undefined || right === undefined) return left?.slope ?? right?.slope ?? 0;
  if (left.slope * right.slope <= 0) return 0;
  const toLeft = left.width + 2 * right.width;
  const toRight = 2 * left.width + right.width;
  // The piece that is nearer to the knot counts more.
  return (toLeft + toRight) / (toLeft / left.slope + toRight / right.slope);
}
