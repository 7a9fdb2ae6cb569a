import type { DeskLink } from './DeskFrame';

/** Links between the parts of one thing, under its heading. */
export function Subnav({ label, links }: { label: string; links: DeskLink[] }) {
  return (
    <nav aria-label={label} className="subnav">
      <ul className="desk-links">
        {links.map(({ href, label: words, isCurrent }) => (
          <li key={href}>
            <a className="desk-link" href={href} aria-current={isCurrent ? 'page' : undefined}>
              {words}
            </a>
          </li>
        ))}
      </ul>
    </nav>
  );
}
