import type { ReactNode } from 'react';

export interface FieldProps {
  label: string;
  children: ReactNode;
  /** The value is a figure. */
  isFigure?: boolean | undefined;
}

/** A small label over a value, as on a ruled form; several of them stand in a `<dl className="fields">`. */
export function Field({ label, children, isFigure = false }: FieldProps) {
  return (
    <div className="field">
      <dt className="form-label">{label}</dt>
      <dd className={isFigure ? 'figure' : undefined}>{children}</dd>
    </div>
  );
}
