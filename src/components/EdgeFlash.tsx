/** Flashes the whole edge of the screen once whenever its count grows, so that a record is seen from a corner of the eye. */
export function EdgeFlash({ count }: { count: number }) {
  if (count <= 0) return null;
  return <div key={count} className="edge-flash" aria-hidden="true" data-testid="edge-flash" />;
}
