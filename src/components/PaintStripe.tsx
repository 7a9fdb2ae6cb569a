/** A swatch of the paint mark, beside the words that name it. */
export function PaintStripe({ words = 'marked' }: { words?: string | undefined }) {
  return (
    <span className="paint-stripe">
      <svg className="drawing" viewBox="0 0 14 24" width="0.875rem" height="1.5rem" aria-hidden="true">
        <rect className="paint" x="4" y="2" width="6" height="20" transform="rotate(14 7 12)" />
      </svg>
      {words}
    </span>
  );
}
