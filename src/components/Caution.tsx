import type { ReactNode } from 'react';

/** The signal words of ANSI Z535, gravest first. */
export type SignalWord = 'danger' | 'warning' | 'caution' | 'notice';

export interface CautionProps {
  level: SignalWord;
  /** What the hazard is and how to avoid it. */
  children: ReactNode;
  /** A standing line under it, softer. */
  standing?: string | undefined;
}

/** A caution that is part of the step: signal word on its colour, the alert triangle for all but NOTICE, then the words. */
export function Caution({ level, children, standing }: CautionProps) {
  return (
    <section className="caution" data-level={level} aria-label={level}>
      <p className="caution-word">
        {level !== 'notice' && <AlertTriangle />}
        {level.toUpperCase()}
      </p>
      <div className="caution-words">
        <div>{children}</div>
        {standing !== undefined && <p className="caution-standing">{standing}</p>}
      </div>
    </section>
  );
}

/** The safety alert symbol: a triangle with an exclamation mark. */
function AlertTriangle() {
  return (
    <svg className="caution-sign" viewBox="0 0 48 43" aria-hidden="true">
      <path className="caution-sign-ground" d="M 24 1.5 L 47 41.5 L 1 41.5 Z" />
      <path className="caution-sign-mark" d="M 21.4 14 L 26.6 14 L 25.4 29.5 L 22.6 29.5 Z" />
      <circle className="caution-sign-mark" cx="24" cy="34.8" r="2.7" />
    </svg>
  );
}
