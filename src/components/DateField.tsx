import type { ComponentProps } from 'react';
import { FormRow, type FormFieldProps } from './FormRow';

export type DateFieldProps = FormFieldProps &
  Omit<ComponentProps<'input'>, 'id' | 'className' | 'type'> & {
    /** With a time of day. */
    hasTime?: boolean | undefined;
  };

/** A date in the browser's own form. */
export function DateField({ label, hint, error, isOptional, hasTime = false, ...input }: DateFieldProps) {
  return (
    <FormRow label={label} hint={hint} error={error} isOptional={isOptional}>
      {(links) => (
        <input
          {...input}
          {...links}
          type={hasTime ? 'datetime-local' : 'date'}
          className="form-input figure"
        />
      )}
    </FormRow>
  );
}
