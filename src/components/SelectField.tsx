import type { ComponentProps } from 'react';
import { FormRow, type FormFieldProps } from './FormRow';

export type SelectFieldProps = FormFieldProps &
  Omit<ComponentProps<'select'>, 'id' | 'className' | 'children'> & {
    options: { value: string; label: string; isDisabled?: boolean | undefined }[];
    /** Shown while nothing is chosen, as "Choose an engine". */
    emptyLabel?: string | undefined;
  };

/** One of a list. */
export function SelectField({
  label,
  hint,
  error,
  isOptional,
  options,
  emptyLabel,
  ...input
}: SelectFieldProps) {
  return (
    <FormRow label={label} hint={hint} error={error} isOptional={isOptional}>
      {(links) => (
        <select {...input} {...links} className="form-input">
          {emptyLabel !== undefined && <option value="">{emptyLabel}</option>}
          {options.map((option) => (
            <option key={option.value} value={option.value} disabled={option.isDisabled}>
              {option.label}
            </option>
          ))}
        </select>
      )}
    </FormRow>
  );
}
