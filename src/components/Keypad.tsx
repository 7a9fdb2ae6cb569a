import { useId } from 'react';
import { readTyped, showTyped, typeKey } from './number-entry';
import { Sign } from './Sign';

export interface KeypadProps {
  /** What is typed, as "Crushed width". */
  label: string;
  unit: string;
  /** The number as typed so far, with a point: "0.04". */
  value: string;
  onChange: (value: string) => void;
  kind?: 'decimal' | 'integer' | undefined;
  /** The decimal sign on the key and in the field; both are understood from a keyboard. */
  separator?: '.' | ',' | undefined;
  maxLength?: number | undefined;
  hint?: string | undefined;
  error?: string | undefined;
  /** Enter on a keyboard. */
  onEnter?: (() => void) | undefined;
}

/** A longer number is set smaller, so that all of it shows. */
const ROOMY_DIGITS = 5;

const DIGITS = ['7', '8', '9', '4', '5', '6', '1', '2', '3'];

/** A number pad for gloves, with the value large over it and its unit always beside it. */
export function Keypad(props: KeypadProps) {
  const {
    label,
    unit,
    value,
    onChange,
    kind = 'decimal',
    separator = '.',
    maxLength = 7,
    hint,
    error,
    onEnter,
  } = props;
  const id = useId();
  const shape = { kind, maxLength };
  const press = (key: string) => onChange(typeKey(value, key, shape));
  return (
    <div className="keypad">
      <label className="form-label" htmlFor={`${id}-value`}>
        {label}
      </label>
      <div className="keypad-value" data-long={value.length > ROOMY_DIGITS || undefined}>
        <input
          id={`${id}-value`}
          className="figure"
          type="text"
          inputMode="none"
          autoComplete="off"
          value={showTyped(value, separator)}
          onChange={(event) => onChange(readTyped(event.target.value, shape))}
          onKeyDown={(event) => event.key === 'Enter' && onEnter?.()}
          aria-describedby={`${id}-unit ${id}-hint`}
          aria-invalid={error === undefined ? undefined : true}
        />
        <span className="keypad-unit figure" id={`${id}-unit`}>
          {unit}
        </span>
      </div>
      <p className="keypad-hint" id={`${id}-hint`} role={error === undefined ? undefined : 'alert'}>
        {error ?? hint ?? ''}
      </p>
      <div className="keypad-keys" role="group" aria-label="Number keys">
        {DIGITS.map((digit) => (
          <PadKey key={digit} words={digit} onPress={() => press(digit)} />
        ))}
        {kind === 'decimal' ? (
          <PadKey
            words={separator}
            says={separator === '.' ? 'decimal point' : 'decimal comma'}
            onPress={() => press('.')}
          />
        ) : (
          <span aria-hidden="true" />
        )}
        <PadKey words="0" onPress={() => press('0')} />
        <PadKey says="erase the last digit" sign onPress={() => onChange(value.slice(0, -1))} />
      </div>
    </div>
  );
}

function PadKey({
  words,
  says,
  sign = false,
  onPress,
}: {
  words?: string;
  says?: string;
  sign?: boolean;
  onPress: () => void;
}) {
  return (
    <button type="button" className="pad-key" aria-label={says} onClick={onPress}>
      {sign ? <Sign name="erase" /> : words}
    </button>
  );
}
