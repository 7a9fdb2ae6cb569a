import type { ReactNode } from 'react';
import { BoltGlyph } from './BoltGlyph';

export interface EmptyStateProps {
  title: string;
  /** What will stand here, or how to begin. */
  children?: ReactNode;
  action?: ReactNode;
}

/** Stands where nothing is yet, and says how something comes there. */
export function EmptyState({ title, children, action }: EmptyStateProps) {
  return (
    <div className="empty-state">
      <BoltGlyph name="" state="waiting" cycles={3} cyclesDone={0} radius={26} isDecorative />
      <div>
        <p className="empty-title">{title}</p>
        {children !== undefined && <div className="empty-words">{children}</div>}
        {action}
      </div>
    </div>
  );
}
