import { useEffect, useState, type RefObject } from 'react';

export interface PhotoInputProps {
  label: string;
  inputRef: RefObject<HTMLInputElement | null>;
  isCamera?: boolean;
  onPick: (file: File) => void;
}

/** The browser's own way to a picture; the buttons of the screen press it. */
export function PhotoInput({ label, inputRef, isCamera = false, onPick }: PhotoInputProps) {
  // The same file chosen twice must be told twice.
  const [round, setRound] = useState(0);
  useEffect(() => {
    if (inputRef.current) inputRef.current.value = '';
  }, [round, inputRef]);
  return (
    <input
      ref={inputRef}
      type="file"
      className="unseen"
      tabIndex={-1}
      aria-label={label}
      accept="image/*"
      {...(isCamera ? { capture: 'environment' as const } : {})}
      onChange={(event) => {
        const [file] = event.target.files ?? [];
        if (!file) return;
        onPick(file);
        setRound(round + 1);
      }}
    />
  );
}
