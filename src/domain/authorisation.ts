import type { Entry } from './entry';
import type { JobState, Verdict } from './job-state';
import { dayIn } from './job-tightening-rules';
import { dayWords } from './time-words';

/*
 * Who is authorised to sign, and until when: a signature is approved by somebody with a certificate that can be
 * named (14 CFR 43.9(a)(4)), and the list of who is authorised is current (14 CFR 121.371(d)).
 */

/** By what somebody signs, as it stands on the paper: "LY-MT-014", "master technician". */
export interface Certificate {
  number: string;
  kind: string;
}

/** What the workshop has of somebody's right to sign; neither is asked for. */
export interface Authorisation {
  certificate?: Certificate | null | undefined;
  /** The last day on which their signature counts, YYYY-MM-DD; null where no end is set. */
  authorisedUntil?: string | null | undefined;
}

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
