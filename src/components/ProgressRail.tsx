import { Sign, type SignName } from './Sign';

export type PhaseState = 'done' | 'now' | 'waiting' | 'blocked';

const SIGNS: Record<PhaseState, SignName> = { done: 'tick', now: 'dot', waiting: 'ring', blocked: 'lock' };

export interface ProgressRailProps {
  label: string;
  phases: { name: string; state: PhaseState; note?: string | undefined }[];
}

/** The phases of a job in a row, with a sign and words for how far each is. */
export function ProgressRail({ label, phases }: ProgressRailProps) {
  return (
    <ol className="rail" aria-label={label}>
      {phases.map(({ name, state, note }) => (
        <li
          key={name}
          className="rail-phase"
          data-state={state}
          aria-current={state === 'now' ? 'step' : undefined}
        >
          <span className="rail-name">
            <Sign name={SIGNS[state]} />
            {name}
          </span>
          <span className="rail-note">{note ?? state}</span>
        </li>
      ))}
    </ol>
  );
}
