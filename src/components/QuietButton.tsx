import { useId } from 'react';
import { Sign, type SignName } from './Sign';

export interface QuietButtonProps {
  label: string;
  onPress: () => void;
  sign?: SignName | undefined;
  /** Why it can't be pressed now. */
  why?: string | undefined;
  /** `square` for the bottom bar, `wide` for the main area. */
  shape?: 'square' | 'wide' | undefined;
  /** Chosen now, for a button that stays down. */
  isPressed?: boolean | undefined;
}

/** A ruled button for whatever is not the main action. */
export function QuietButton({ label, onPress, sign, why, shape = 'square', isPressed }: QuietButtonProps) {
  const id = useId();
  return (
    <button
      type="button"
      className="quiet-button"
      data-shape={shape}
      aria-labelledby={`${id}-label`}
      aria-describedby={why === undefined ? undefined : `${id}-why`}
      aria-pressed={isPressed}
      aria-disabled={why === undefined ? undefined : true}
      onClick={why === undefined ? onPress : undefined}
    >
      {sign !== undefined && <Sign name={sign} />}
      <span id={`${id}-label`}>{label}</span>
      {why !== undefined && (
        <span className="quiet-button-why" id={`${id}-why`}>
          {why}
        </span>
      )}
    </button>
  );
}
