import { useId, type ReactNode } from 'react';

/** What every form field takes beside its own input's attributes. */
export interface FormFieldProps {
  label: string;
  hint?: ReactNode;
  /** What is wrong and how to mend it. */
  error?: string | undefined;
  /** The label says "optional" for those that may stay empty. */
  isOptional?: boolean | undefined;
}

/** The ids and attributes that tie an input to its label, hint and error. */
export interface FieldLinks {
  id: string;
  'aria-describedby': string | undefined;
  'aria-invalid': true | undefined;
}

/** Lays out one field of a form and hands its input the ids that tie it to label, hint and error. */
export function FormRow({
  label,
  hint,
  error,
  isOptional = false,
  children,
}: FormFieldProps & { children: (links: FieldLinks) => ReactNode }) {
  const id = useId();
  const hintId = hint === undefined ? undefined : `${id}-hint`;
  const errorId = error === undefined ? undefined : `${id}-error`;
  const describedBy = [errorId, hintId].filter((each) => each !== undefined).join(' ');
  return (
    <div className="form-row" data-wrong={error === undefined ? undefined : true}>
      <label className="form-label" htmlFor={id}>
        {label}
        {isOptional && <span className="form-optional"> (optional)</span>}
      </label>
      {children({
        id,
        'aria-describedby': describedBy === '' ? undefined : describedBy,
        'aria-invalid': error === undefined ? undefined : true,
      })}
      {error !== undefined && (
        <p className="form-error" id={errorId}>
          {error}
        </p>
      )}
      {hint !== undefined && (
        <p className="form-hint" id={hintId}>
          {hint}
        </p>
      )}
    </div>
  );
}
