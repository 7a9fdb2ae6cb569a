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
  const start = slopeAtEnd(piece, pieces[at - 1]);
  const end = slopeAtEnd(piece, pieces[at + 1]);
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

/** The slope at the knot that a piece shares with its neighbour: a weighted harmonic mean; level where they turn. */
function slopeAtEnd(piece: Piece, neighbour: Piece | undefined): number {
  if (neighbour === undefined) return piece.slope;
  if (piece.slope * neighbour.slope <= 0) return 0;
  // The piece that is nearer to the knot counts more.
  const ofPiece = piece.width + 2 * neighbour.width;
  const ofNeighbour = 2 * piece.width + neighbour.width;
  return (ofPiece + ofNeighbour) / (ofPiece / piece.slope + ofNeighbour / neighbour.slope);
}
