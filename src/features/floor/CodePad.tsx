import { useId } from 'react';
import { Sign } from '@/components/Sign';

const KEYS = Array.from('1234567890ABCDEFGHIJKLMNOPQRSTUVWXYZ-/');
const MAX_LENGTH = 24;

export interface CodePadProps {
  /** What is typed, as "Lot of the shells". */
  label: string;
  value: string;
  onChange: (value: string) => void;
}

/** Large keys for a lot or a number off a label; a scanner or a keyboard types into the field as well. */
export function CodePad({ label, value, onChange }: CodePadProps) {
  const id = useId();
  const type = (text: string) => onChange(text.toUpperCase().replace(/\s+/g, ' ').slice(0, MAX_LENGTH));
  return (
    <div role="group" aria-labelledby={`${id}-label`} className="w-full">
      <label id={`${id}-label`} htmlFor={id} className="form-label">
        {label}
      </label>
      <input
        id={id}
        className="figure min-h-18 w-full border-b-2 border-text bg-transparent text-4xl font-semibold"
        type="text"
        inputMode="none"
        autoComplete="off"
        value={value}
        onChange={(event) => type(event.target.value)}
      />
      <div className="grid grid-cols-[repeat(auto-fill,minmax(4.5rem,1fr))] gap-3 pt-3">
        {KEYS.map((key) => (
          <button key={key} type="button" className="pad-key" onClick={() => type(value + key)}>
            {key}
          </button>
        ))}
        <button
          type="button"
          className="pad-key"
          aria-label="erase the last letter"
          onClick={() => type(value.slice(0, -1))}
        >
          <Sign name="erase" />
        </button>
      </div>
    </div>
  );
}
