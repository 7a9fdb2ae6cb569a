/** A point in a drawing, y downwards. */
export interface Point {
  x: number;
  y: number;
}

/** The point on a circle at an angle counted clockwise from the top, as a wrench turns. */
export function pointAt(centre: Point, radius: number, degrees: number): Point {
  const radians = (degrees * Math.PI) / 180;
  return { x: round(centre.x + radius * Math.sin(radians)), y: round(centre.y - radius * Math.cos(radians)) };
}

/** The `points` of a hexagon standing on a corner. */
export function hexagonPoints(centre: Point, radius: number): string {
  return [0, 60, 120, 180, 240, 300]
    .map((degrees) => pointAt(centre, radius, degrees))
    .map(({ x, y }) => `${x},${y}`)
    .join(' ');
}

/** The path of an arc from the top through an angle: clockwise when positive, anticlockwise when negative. */
export function arcPath(centre: Point, radius: number, degrees: number): string {
  const shown = Math.max(-359, Math.min(359, degrees));
  const from = pointAt(centre, radius, 0);
  const to = pointAt(centre, radius, shown);
  const isLong = Math.abs(shown) > 180 ? 1 : 0;
  const sweep = shown >= 0 ? 1 : 0;
  return `M ${from.x} ${from.y} A ${radius} ${radius} 0 ${isLong} ${sweep} ${to.x} ${to.y}`;
}

/** The path of an open arrow head at the end of such an arc, pointing the way the arc runs. */
export function arrowPath(centre: Point, radius: number, degrees: number, size: number): string {
  const shown = Math.max(-359, Math.min(359, degrees));
  const back = ((shown >= 0 ? -1 : 1) * size * 57.3) / radius;
  const tip = pointAt(centre, radius, shown);
  const inner = pointAt(centre, radius - size * 0.75, shown + back);
  const outer = pointAt(centre, radius + size * 0.75, shown + back);
  return `M ${inner.x} ${inner.y} L ${tip.x} ${tip.y} L ${outer.x} ${outer.y}`;
}

/** Where the dots of the cycles lie in a bolt head: a row of up to four, else a ring of them. */
export function dotPoints(centre: Point, radius: number, count: number): Point[] {
  if (count > 4) {
    return Array.from({ length: count }, (_, i) => pointAt(centre, radius * 0.36, (i * 360) / count));
  }
  const gap = radius * (count === 4 ? 0.3 : 0.37);
  return Array.from({ length: count }, (_, i) => ({
    x: round(centre.x + (i - (count - 1) / 2) * gap),
    y: round(centre.y + radius * 0.03),
  }));
}

/** Two decimals are finer than any screen, and keep the page and its server-made twin alike. */
function round(value: number): number {
  return Math.round(value * 100) / 100;
}
