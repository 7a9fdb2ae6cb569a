import type { ReactNode } from 'react';
import { Sign, type SignName } from './Sign';

export type NoticeTone = 'note' | 'good' | 'unsure' | 'stop';

const SIGNS: Record<NoticeTone, SignName> = { note: 'dot', good: 'tick', unsure: 'question', stop: 'cross' };

export interface NoticeProps {
  tone?: NoticeTone | undefined;
  title: string;
  children?: ReactNode;
  /** Read out at once, for what just happened. */
  isAlert?: boolean | undefined;
}

/** A few words about the page's state, with a sign beside their colour. */
export function Notice({ tone = 'note', title, children, isAlert = false }: NoticeProps) {
  return (
    <div className="notice" data-tone={tone} role={isAlert ? 'alert' : undefined}>
      <p className="notice-title">
        <Sign name={SIGNS[tone]} />
        {title}
      </p>
      {children !== undefined && <div className="notice-words">{children}</div>}
    </div>
  );
}
