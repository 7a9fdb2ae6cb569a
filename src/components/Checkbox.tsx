import { useId, type ComponentProps, type ReactNode } from 'react';

export type CheckboxProps = Omit<ComponentProps<'input'>, 'id' | 'className' | 'type'> & {
  label: ReactNode;
  hint?: ReactNode;
  error?: string | undefined;
};

/** One box to tick on a desktop form. */
export function Checkbox({ label, hint, error, ...input }: CheckboxProps) {
  const id = useId();
  const words = error ?? hint;
  return (
    <div className="form-check" data-wrong={error === undefined ? undefined : true}>
      <input
        {...input}
        id={id}
        type="checkbox"
        aria-describedby={words === undefined ? undefined : `${id}-words`}
        aria-invalid={error === undefined ? undefined : true}
      />
      <div>
        <label htmlFor={id}>{label}</label>
        {words !== undefined && (
          <p className={error === undefined ? 'form-hint' : 'form-error'} id={`${id}-words`}>
            {words}
          </p>
        )}
      </div>
    </div>
  );
}
