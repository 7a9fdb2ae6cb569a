/** The span of a scale: the limits with air on both sides, widened so that every value shows. */
export function scaleSpan(limits: number[], values: number[]): { from: number; to: number } {
  const known = limits.length > 0 ? limits : values;
  const low = Math.min(...known);
  const high = Math.max(...known);
  const air = Math.max((high - low) * 0.22, Math.abs(high) * 0.02, Number.EPSILON);
  const lowest = Math.min(low - air, ...values.map((value) => value - air * 0.2));
  const highest = Math.max(high + air, ...values.map((value) => value + air * 0.2));
  return { from: lowest, to: highest };
}

/** Where a value lies on a span, as a percentage for an SVG that stretches; kept within the drawing. */
export function placeOn(span: { from: number; to: number }, value: number): number {
  const share = (value - span.from) / (span.to - span.from);
  return Math.round(Math.min(1, Math.max(0, share)) * 10_000) / 100;
}
