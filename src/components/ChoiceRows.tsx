import { useId } from 'react';

/** One answer among a few. */
export interface Choice<T extends string = string> {
  value: T;
  label: string;
  note?: string | undefined;
  /** Why it can't be chosen now. */
  why?: string | undefined;
}

export interface ChoiceRowsProps<T extends string = string> {
  label: string;
  choices: Choice<T>[];
  value?: T | undefined;
  onChoose: (value: T) => void;
  columns?: 1 | 2 | 3 | undefined;
  /** The label stays for a screen reader only, where the heading of the screen says it. */
  isLabelUnseen?: boolean | undefined;
}

/** A few answers as large rows, one of which is chosen. */
export function ChoiceRows<T extends string>({
  label,
  choices,
  value,
  onChoose,
  columns = 1,
  isLabelUnseen = false,
}: ChoiceRowsProps<T>) {
  const name = useId();
  return (
    <fieldset className="choices">
      <legend className={isLabelUnseen ? 'unseen' : 'choices-label'}>{label}</legend>
      <div className="choices-grid" data-columns={columns}>
        {choices.map((choice) => (
          <ChoiceRow
            key={choice.value}
            name={name}
            {...choice}
            isChosen={choice.value === value}
            onChoose={onChoose}
          />
        ))}
      </div>
    </fieldset>
  );
}

type ChoiceRowProps<T extends string> = Choice<T> & {
  name: string;
  isChosen: boolean;
  onChoose: (value: T) => void;
};

function ChoiceRow<T extends string>({
  name,
  value,
  label,
  note,
  why,
  isChosen,
  onChoose,
}: ChoiceRowProps<T>) {
  const id = useId();
  const words = why ?? note;
  return (
    <label className="choice" data-barred={why === undefined ? undefined : true}>
      <input
        type="radio"
        name={name}
        value={value}
        checked={isChosen}
        disabled={why !== undefined}
        onChange={() => onChoose(value)}
        aria-labelledby={`${id}-label`}
        aria-describedby={words === undefined ? undefined : `${id}-words`}
      />
      <span className="choice-ring" aria-hidden="true" />
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
