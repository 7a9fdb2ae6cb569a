import { Notice } from '@/components/Notice';
import { dayAndTime } from '@/domain/time-words';
import type { GivenLink } from './people-answer';

/** The one-time link, shown once: whoever has it sets the password. */
export function LinkNote({ link, zone }: { link: GivenLink; zone: string }) {
  return (
    <Notice tone="unsure" title={`Give this link to ${link.name}, and to nobody else`} isAlert>
      <p className="figure break-all">{link.link}</p>
      <p>
        It works once, until {dayAndTime(link.expiresAt, zone)}. It isn’t shown again; a new one can be made.
      </p>
    </Notice>
  );
}
