import type { ComponentProps } from 'react';
import type { ButtonLook } from './Button';

export type ButtonLinkProps = Omit<ComponentProps<'a'>, 'className'> & {
  href: string;
  look?: ButtonLook | undefined;
};

/** A link that looks like a button, for going to the place where something is done. */
export function ButtonLink({ look = 'quiet', children, ...link }: ButtonLinkProps) {
  return (
    <a {...link} className="button" data-look={look}>
      {children}
    </a>
  );
}
