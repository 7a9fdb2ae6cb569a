import type { ReactNode } from 'react';
import { Sign, type SignName } from './Sign';

/** How a reading stands to its limits; `none` where no limit is known. */
export type VerdictKind = 'inside' | 'unsure' | 'outside' | 'none';

const SIGNS: Record<VerdictKind, { sign: SignName; word: string }> = {
  inside: { sign: 'tick', word: 'Inside' },
  unsure: { sign: 'question', word: 'Unsure' },
  outside: { sign: 'cross', word: 'Outside' },
  none: { sign: 'minus', word: 'No limit known' },
};

export interface VerdictProps {
  kind: VerdictKind;
  /** Another word than the usual one. */
  word?: string | undefined;
  /** What it means here: where it lies, what the other end reads. */
  children?: ReactNode;
  size?: 'large' | 'band' | 'small' | undefined;
}

/** A verdict with its sign and its word beside its colour. */
export function Verdict({ kind, word, children, size = 'large' }: VerdictProps) {
  const { sign, word: usual } = SIGNS[kind];
  return (
    <div className="verdict" data-kind={kind} data-size={size}>
      <p className="verdict-word">
        <Sign name={sign} />
        {word ?? usual}
      </p>
      {children !== undefined && <div className="verdict-words">{children}</div>}
    </div>
  );
}
