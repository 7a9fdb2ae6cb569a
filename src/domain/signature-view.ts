/* A signature as it is shown on paper and screen: how far it counts, in the signer's own words. */
import { DONE_PAST } from './job-evidence';
import type { Signature } from './job-state';
import { dayAndTime } from './time-words';

/** What an ink stamp says. */
export interface SignatureView {
  state: 'signed' | 'to be checked' | 'revoked' | 'open again';
  name: string;
  time: string;
  words: string;
  covers: string;
  isNotIndependent: boolean;
}

/** The signature as its stamp shows it; one that no longer stands says why. */
export function signatureView(signature: Signature, zone: string): SignatureView {
  const { name, at, meaning, count, covered, reopened, donePast = [], notIndependent } = signature;
  const past =
    donePast.length === 0
      ? ''
      : `; ${donePast.length} ${donePast.length === 1 ? 'step' : 'steps'} ${DONE_PAST}`;
  const entries = covered === 1 ? '1 entry' : `${covered} entries`;
  return {
    state: stateOf(signature),
    name,
    time: dayAndTime(at, zone),
    words: count === undefined ? meaning : meaning.replaceAll('{count}', String(count)),
    covers: reopened === undefined ? entries : `${entries}. It no longer stands: ${reopened}${past}`,
    isNotIndependent: notIndependent !== undefined,
  };
}

function stateOf({ checkedAt, reopened }: Signature): SignatureView['state'] {
  if (reopened !== undefined) return reopened.startsWith('revoked') ? 'revoked' : 'open again';
  return checkedAt === undefined ? 'to be checked' : 'signed';
}
