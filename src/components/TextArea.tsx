import type { ComponentProps } from 'react';
import { FormRow, type FormFieldProps } from './FormRow';

export type TextAreaProps = FormFieldProps & Omit<ComponentProps<'textarea'>, 'id' | 'className'>;

/** Several lines of text. */
export function TextArea({ label, hint, error, isOptional, ...input }: TextAreaProps) {
  return (
    <FormRow label={label} hint={hint} error={error} isOptional={isOptional}>
      {(links) => <textarea rows={3} {...input} {...links} className="form-input" />}
    </FormRow>
  );
}
