import type { Authorisation } from './certificate';
import type { Entry } from './entry';
import type { JobState, Verdict } from './job-state';
import { dayIn, dayWords } from './time-words';

/*
 * Who is authorised to sign, and until when: a signature is approved by somebody with a certificate that can be
 * named (14 CFR 43.9(a)(4)), and the list of who is authorised is current (14 CFR 121.371(d)).
 */

/** Why somebody's signature does not count on a day of the workshop; the last day itself still counts. */
export function whyNotAuthorised(
  { name, authorisedUntil = null }: Authorisation & { name: string },
  on: string,
): Verdict {
  if (authorisedUntil === null || on <= authorisedUntil) return { ok: true };
  return {
    ok: false,
    code: 'authorisation-over',
    why: `The authorisation of ${name} to sign counted until ${dayWords(authorisedUntil)}.`,
    unlock: 'The owner renews it on the People page.',
  };
}

/** The same for an entry, where it is one that only the authorised make. */
export function whyNotAuthorisedFor(
  state: JobState,
  entry: Entry,
  person: Authorisation & { name: string },
  zone: string,
): Verdict {
  return isByTheAuthorised(state, entry) ? whyNotAuthorised(person, dayIn(zone, entry.at)) : { ok: true };
}

/** Signatures of hold points, countersigns, dispositions of class A, and handing over. */
function isByTheAuthorised(state: JobState, entry: Entry): boolean {
  switch (entry.kind) {
    case 'signed':
    case 'countersigned':
    case 'handed-over':
      return true;
    case 'deviation-disposed':
      return state.deviations.some((one) => one.id === entry.data.deviation && one.class === 'A');
    default:
      return false;
  }
}
