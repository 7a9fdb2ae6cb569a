import type { ReactNode } from 'react';
import { WitnessmarkSign } from './WitnessmarkSign';

/** A link of the header. */
export interface DeskLink {
  href: string;
  label: string;
  isCurrent?: boolean | undefined;
}

export interface DeskFrameProps {
  /** The areas that this person may enter. */
  links: DeskLink[];
  /** Links within the present thing, as a job's "Trail" and "Pack". */
  sublinks?: DeskLink[] | undefined;
  /** What the sublinks belong to, as "Job 0147". */
  sublabel?: string | undefined;
  /** Who is signed in; the name leads to their own page, where they also sign out. */
  person?: { name: string; roles: string; href: string; isCurrent?: boolean | undefined } | undefined;
  /** At the far right, such as the sign-out button. */
  corner?: ReactNode;
  /** No gap around the page, for screens that rule themselves to the edge. */
  isFlush?: boolean | undefined;
  children?: ReactNode;
}

/** The frame of every desktop page: the mark, the areas, the person, then the page. */
export function DeskFrame({
  links,
  sublinks = [],
  sublabel,
  person,
  corner,
  isFlush = false,
  children,
}: DeskFrameProps) {
  return (
    <div className="desk">
      <a className="skip-link" href="#page">
        To the page
      </a>
      <header className="desk-top">
        <a className="desk-home" href="/">
          <WitnessmarkSign size={40} />
          Witnessmark
        </a>
        <nav aria-label="Areas">
          <LinkRow links={links} />
        </nav>
        <div className="desk-corner">
          {sublinks.length > 0 && (
            <nav aria-label={sublabel ?? 'Here'} className="desk-sub">
              {sublabel !== undefined && <span>{sublabel}</span>}
              <LinkRow links={sublinks} />
            </nav>
          )}
          {person !== undefined && (
            <a
              className="desk-person"
              href={person.href}
              aria-current={person.isCurrent === true ? 'page' : undefined}
              aria-label={`${person.name}, ${person.roles}: your PIN, password and signing out`}
            >
              <b>{person.name}</b>
              <span>{person.roles}</span>
            </a>
          )}
          {corner}
        </div>
      </header>
      <main id="page" className="desk-page" data-flush={isFlush || undefined} tabIndex={-1}>
        {children}
      </main>
    </div>
  );
}

function LinkRow({ links }: { links: DeskLink[] }) {
  return (
    <ul className="desk-links">
      {links.map(({ href, label, isCurrent }) => (
        <li key={href}>
          <a className="desk-link" href={href} aria-current={isCurrent ? 'page' : undefined}>
            {label}
          </a>
        </li>
      ))}
    </ul>
  );
}
