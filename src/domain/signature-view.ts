/* A signature as it is shown on paper and screen: how far it counts, in the signer's own words. */
import { DONE_PAST } from './job-evidence';
import type { Signature } from './job-state';
import { findStep, type Plan } from './plan';
import { dayAndTime } from './time-words';

/** What an ink stamp says. */
export interface SignatureView {
  state: 'signed' | 'to be checked' | 'revoked' | 'open again';
  name: string;
  time: string;
  words: string;
  covers: string;
  isNotIndependent: boolean;
  /** By which certificate, as "LY-MT-014, master technician". */
  certificate: string | undefined;
}

/** "Hold point: caps marked" is "caps marked" where the words before it speak of a signature. */
export function holdPointName(title: string): string {
  return title.replace(/^Hold point: /, '');
}

/** The hold point of a step by its name; the step's id where the plan doesn't have it any more. */
export function holdPointOf(plan: Plan, step: string): string {
  return holdPointName(findStep(plan, step)?.title ?? step);
}

/** By which certificate it was signed, as "LY-MT-014, master technician"; undefined where none is on it. */
export function certificateWords({ certificate }: Pick<Signature, 'certificate'>): string | undefined {
  return certificate && `${certificate.number}, ${certificate.kind}`;
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
    certificate: certificateWords(signature),
  };
}

function stateOf({ checkedAt, reopened }: Signature): SignatureView['state'] {
  if (reopened !== undefined) return reopened.startsWith('revoked') ? 'revoked' : 'open again';
  return checkedAt === undefined ? 'to be checked' : 'signed';
}
