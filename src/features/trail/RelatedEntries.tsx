import type { Related } from './related';

/** What other entries say about this one: old value, new value, who, when, why, and the way there. */
export function RelatedEntries({ related, onGo }: { related: Related[]; onGo: (seq: number) => void }) {
  if (related.length === 0) return null;
  return (
    <ul className="trail-related" aria-label="Entries about this one">
      {related.map(({ seq, title, before, after, who, when, why }) => (
        <li key={`${seq} ${title}`}>
          <button type="button" className="button" data-look="link" onClick={() => onGo(seq)}>
            {title}
          </button>
          <span className="text-soft">
            {' '}
            {who}, {when}
            {why === undefined ? '' : `: ${why}`}
          </span>
          {before !== undefined && (
            <p>
              {after === undefined ? '' : 'Before: '}
              <span data-superseded={after !== undefined || undefined}>{before}</span>
            </p>
          )}
          {after !== undefined && <p>After: {after}</p>}
        </li>
      ))}
    </ul>
  );
}
