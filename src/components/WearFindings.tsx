import type { ReactNode } from 'react';

export interface WearFindingsProps {
  /** The worst of all, as "copper showing". */
  worst: string;
  /** The means of both halves, in words. */
  means: string;
  /** What stands out, each with what it commonly points to. */
  patterns: readonly string[];
  /** Says that all this is a hint. */
  hint: ReactNode;
  /** So many patterns at most; how many are left out is said. */
  most?: number | undefined;
  /** What somebody has to do about it, before the patterns. */
  children?: ReactNode;
}

/** What graded shells say side by side. */
export function WearFindings({
  worst,
  means,
  patterns,
  hint,
  most = Number.POSITIVE_INFINITY,
  children,
}: WearFindingsProps) {
  const shown = patterns.slice(0, most);
  const left = patterns.length - shown.length;
  return (
    <div className="wear-findings">
      <p className="wear-worst">Worst: {worst}</p>
      <p className="wear-means">{means}</p>
      {children}
      {shown.length > 0 ? (
        <ul>
          {shown.map((words) => (
            <li key={words}>{words}</li>
          ))}
          {left > 0 && <li>{left === 1 ? 'One more' : `${left} more`} on the step itself.</li>}
        </ul>
      ) : (
        <p>No pattern stands out.</p>
      )}
      <p className="wear-hint-line">{hint}</p>
    </div>
  );
}
