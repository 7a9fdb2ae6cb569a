import { useId, type KeyboardEvent } from 'react';

export interface MainActionProps {
  /** What was done or is to be done, as "Turned 110°". */
  label: string;
  /** At the right end: what happens next, or how else to press. */
  next?: string | undefined;
  onPress: () => void;
  /** Why it can't be pressed now; it is then no target and says so. */
  why?: string | undefined;
  isBusy?: boolean | undefined;
  type?: 'button' | 'submit' | undefined;
}

/** The one wide block at the bottom of a Floor screen that records the present step. */
export function MainAction({ label, next, onPress, why, isBusy = false, type = 'button' }: MainActionProps) {
  const id = useId();
  const words = why ?? next;
  const isBarred = why !== undefined || isBusy;
  return (
    <button
      type={type}
      className="main-action"
      aria-labelledby={`${id}-label`}
      aria-describedby={words === undefined ? undefined : `${id}-words`}
      aria-disabled={isBarred || undefined}
      aria-busy={isBusy || undefined}
      onClick={isBarred ? (event) => event.preventDefault() : onPress}
      onKeyDown={ignoreRepeat}
    >
      <span className="main-action-label" id={`${id}-label`}>
        {label}
      </span>
      {words !== undefined && (
        <span className="main-action-next" id={`${id}-words`}>
          {words}
        </span>
      )}
    </button>
  );
}

/** A pedal held down, or a leaning elbow on Enter, must not record a second time. */
function ignoreRepeat(event: KeyboardEvent) {
  if (event.repeat) event.preventDefault();
}
