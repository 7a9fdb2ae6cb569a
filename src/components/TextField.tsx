import type { ComponentProps } from 'react';
import { FormRow, type FormFieldProps } from './FormRow';

export type TextFieldProps = FormFieldProps &
  Omit<ComponentProps<'input'>, 'id' | 'className'> & {
    /** Stands after the input, as "mm". */
    unit?: string | undefined;
    /** A figure: mono face. */
    isFigure?: boolean | undefined;
  };

/** One line of text; takes every attribute of an input, so a form library's registration spreads into it. */
export function TextField({
  label,
  hint,
  error,
  isOptional,
  unit,
  isFigure = false,
  ...input
}: TextFieldProps) {
  return (
    <FormRow label={label} hint={hint} error={error} isOptional={isOptional}>
      {(links) => (
        <span className="form-input-box">
          <input
            type="text"
            {...input}
            {...links}
            className={isFigure ? 'form-input figure' : 'form-input'}
          />
          {unit !== undefined && <span className="form-unit">{unit}</span>}
        </span>
      )}
    </FormRow>
  );
}
