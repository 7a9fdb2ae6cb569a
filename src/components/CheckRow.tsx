import { useId } from 'react';
import { Sign } from './Sign';

export interface CheckRowProps {
  label: string;
  note?: string | undefined;
  isChecked: boolean;
  onChange: (isChecked: boolean) => void;
  /** Why it can't be changed now. */
  why?: string | undefined;
}

/** One large row to tick. */
export function CheckRow({ label, note, isChecked, onChange, why }: CheckRowProps) {
  const id = useId();
  const words = why ?? note;
  return (
    <label className="choice is-check" data-barred={why === undefined ? undefined : true}>
      <input
        type="checkbox"
        checked={isChecked}
        disabled={why !== undefined}
        onChange={(event) => onChange(event.target.checked)}
        aria-labelledby={`${id}-label`}
        aria-describedby={words === undefined ? undefined : `${id}-words`}
      />
      <span className="check-box" aria-hidden="true">
        {isChecked && <Sign name="tick" />}
      </span>
      <span className="choice-words">
        <span className="choice-label" id={`${id}-label`}>
          {label}
        </span>
        {words !== undefined && (
          <span className="choice-note" id={`${id}-words`}>
            {words}
          </span>
        )}
      </span>
    </label>
  );
}
