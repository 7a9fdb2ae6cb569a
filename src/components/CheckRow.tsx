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
  return (
    <label className="choice is-check" data-barred={why === undefined ? undefined : true}>
      <input
        type="checkbox"
        checked={isChecked}
        disabled={why !== undefined}
        onChange={(event) => onChange(event.target.checked)}
      />
      <span className="check-box" aria-hidden="true">
        {isChecked && <Sign name="tick" />}
      </span>
      <span className="choice-words">
        <span className="choice-label">{label}</span>
        {(why ?? note) !== undefined && <span className="choice-note">{why ?? note}</span>}
      </span>
    </label>
  );
}
