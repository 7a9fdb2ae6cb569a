import type { ReactNode } from 'react';
import { Sign } from './Sign';

export interface ErrorNoteProps {
  /** What happened, in a sentence. */
  happened: string;
  /** That nothing was lost, or what was. */
  kept: string;
  /** What to do next. */
  next: string;
  /** The button that does it. */
  action?: ReactNode;
}

/** Says what went wrong, what is safe and what to do next, always in that order. */
export function ErrorNote({ happened, kept, next, action }: ErrorNoteProps) {
  return (
    <div className="error-note" role="alert">
      <p className="error-happened">
        <Sign name="cross" />
        {happened}
      </p>
      <p>{kept}</p>
      <p>
        <b>{next}</b>
      </p>
      {action}
    </div>
  );
}
