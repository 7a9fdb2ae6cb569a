import { useEffect, useId, useRef, type KeyboardEvent as FieldKey } from 'react';
import { Sign } from '@/components/Sign';

const KEYS = Array.from('1234567890ABCDEFGHIJKLMNOPQRSTUVWXYZ-/');
const MAX_LENGTH = 24;

export interface CodePadProps {
  /** What is typed, as "Lot of the shells". */
  label: string;
  value: string;
  onChange: (value: string) => void;
}

/**
 * Large keys for a lot or a number off a label. A scanner or a keyboard types into it without a touch: its first
 * letter goes to the field wherever the screen stands, and its Enter presses the main action.
 */
export function CodePad({ label, value, onChange }: CodePadProps) {
  const id = useId();
  const field = useRef<HTMLInputElement>(null);
  useTypedAnywhere(field);
  const type = (text: string) => onChange(text.toUpperCase().replace(/\s+/g, ' ').slice(0, MAX_LENGTH));
  return (
    <div role="group" aria-labelledby={`${id}-label`} className="w-full">
      <label id={`${id}-label`} htmlFor={id} className="form-label">
        {label}
      </label>
      <input
        ref={field}
        id={id}
        className="figure min-h-18 w-full border-b-2 border-text bg-transparent text-4xl font-semibold outline-offset-[-2px]"
        type="text"
        inputMode="none"
        autoComplete="off"
        value={value}
        onChange={(event) => type(event.target.value)}
        onKeyDown={pressMain}
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

/** The Enter that ends a scan keeps what was scanned, as a touch on the main action would. */
function pressMain(event: FieldKey<HTMLInputElement>): void {
  if (event.key !== 'Enter' || event.repeat || event.currentTarget.value === '') return;
  event.preventDefault();
  document.querySelector<HTMLElement>('.main-action')?.click();
}

/** A letter or a digit that is typed beside every field is meant for this one; a new scan replaces an old one. */
function useTypedAnywhere(field: { readonly current: HTMLInputElement | null }): void {
  useEffect(() => {
    function toField(event: KeyboardEvent): void {
      if (event.defaultPrevented || event.ctrlKey || event.altKey || event.metaKey) return;
      if (!/^[\w/-]$/.test(event.key) || isField(event.target) || document.querySelector('dialog[open]'))
        return;
      // Before the key's own letter is typed, so that it arrives here; and before a key of the Floor is made of it.
      event.stopPropagation();
      field.current?.focus();
      field.current?.select();
    }
    addEventListener('keydown', toField, { capture: true });
    return () => removeEventListener('keydown', toField, { capture: true });
  }, [field]);
}

function isField(target: EventTarget | null): boolean {
  return target instanceof Element && target.closest('input, textarea, select') !== null;
}
