import { useId } from 'react';
import { Sign } from './Sign';

export interface PinPadProps {
  /** Whose PIN, as "PIN of Ines Varga". */
  label: string;
  value: string;
  onChange: (value: string) => void;
  /** Enter on a keyboard. */
  onEnter?: (() => void) | undefined;
  /** Most digits. */
  maxLength?: number | undefined;
  /** Digits that must be there, drawn as open rings. */
  length?: number | undefined;
  hint?: string | undefined;
  error?: string | undefined;
}

const DIGITS = ['1', '2', '3', '4', '5', '6', '7', '8', '9'];

/** A pad for a PIN: it shows how many digits are there and never which. */
export function PinPad({
  label,
  value,
  onChange,
  onEnter,
  maxLength = 8,
  length = 6,
  hint,
  error,
}: PinPadProps) {
  const id = useId();
  const type = (text: string) => onChange(text.replace(/\D/g, '').slice(0, maxLength));
  const rings = Math.max(length, value.length);
  return (
    <div className="keypad is-pin">
      <label className="form-label" htmlFor={`${id}-value`}>
        {label}
      </label>
      <div className="pin-value">
        <input
          id={`${id}-value`}
          type="password"
          inputMode="none"
          autoComplete="off"
          data-1p-ignore
          value={value}
          onChange={(event) => type(event.target.value)}
          onKeyDown={(event) => event.key === 'Enter' && onEnter?.()}
          aria-describedby={`${id}-hint`}
          aria-invalid={error === undefined ? undefined : true}
        />
        <span className="pin-dots" aria-hidden="true">
          {Array.from({ length: rings }, (_, i) => (
            <i key={i} data-filled={i < value.length || undefined} />
          ))}
        </span>
      </div>
      <p className="keypad-hint" id={`${id}-hint`} role={error === undefined ? undefined : 'alert'}>
        {error ?? hint ?? ''}
      </p>
      <div className="keypad-keys" role="group" aria-label="Number keys">
        {DIGITS.map((digit) => (
          <button key={digit} type="button" className="pad-key" onClick={() => type(value + digit)}>
            {digit}
          </button>
        ))}
        <button type="button" className="pad-key is-words" onClick={() => onChange('')}>
          clear
        </button>
        <button type="button" className="pad-key" onClick={() => type(`${value}0`)}>
          0
        </button>
        <button
          type="button"
          className="pad-key"
          aria-label="erase the last digit"
          onClick={() => onChange(value.slice(0, -1))}
        >
          <Sign name="erase" />
        </button>
      </div>
    </div>
  );
}
