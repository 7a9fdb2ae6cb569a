import type { ComponentProps } from 'react';

export type ButtonLook = 'main' | 'quiet' | 'stop' | 'link';

export type ButtonProps = Omit<ComponentProps<'button'>, 'className'> & {
  look?: ButtonLook | undefined;
  /** Waiting for an answer: it says so and takes no second press. */
  isBusy?: boolean | undefined;
};

/** A button of a desktop page. */
export function Button({
  look = 'quiet',
  isBusy = false,
  type = 'button',
  onClick,
  children,
  ...button
}: ButtonProps) {
  return (
    <button
      {...button}
      type={type}
      className="button"
      data-look={look}
      aria-busy={isBusy || undefined}
      aria-disabled={isBusy || undefined}
      onClick={isBusy ? (event) => event.preventDefault() : onClick}
    >
      {children}
    </button>
  );
}
