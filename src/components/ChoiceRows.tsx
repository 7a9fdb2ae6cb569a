import { useId } from 'react';

/** One answer among a few. */
export interface Choice {
  value: string;
  label: string;
  note?: string | undefined;
  /** Why it can't be chosen now. */
  why?: string | undefined;
}

export interface ChoiceRowsProps {
  label: string;
  choices: Choice[];
  value?: string | undefined;
  onChoose: (value: string) => void;
  columns?: 1 | 2 | 3 | undefined;
  /** The label stays for a screen reader only, where the heading of the screen says it. */
  isLabelUnseen?: boolean | undefined;
}

/** A few answers as large rows, one of which is chosen. */
export function ChoiceRows({
  label,
  choices,
  value,
  onChoose,
  columns = 1,
  isLabelUnseen = false,
}: ChoiceRowsProps) {
  const name = useId();
  return (
    <fieldset className="choices">
      <legend className={isLabelUnseen ? 'unseen' : 'choices-label'}>{label}</legend>
      <div className="choices-grid" data-columns={columns}>
        {choices.map((choice) => (
          <label
            key={choice.value}
            className="choice"
            data-barred={choice.why === undefined ? undefined : true}
          >
            <input
              type="radio"
              name={name}
              value={choice.value}
              checked={choice.value === value}
              disabled={choice.why !== undefined}
              onChange={() => onChoose(choice.value)}
            />
            <span className="choice-ring" aria-hidden="true" />
            <span className="choice-words">
              <span className="choice-label">{choice.label}</span>
              {(choice.why ?? choice.note) !== undefined && (
                <span className="choice-note">{choice.why ?? choice.note}</span>
              )}
            </span>
          </label>
        ))}
      </div>
    </fieldset>
  );
}
