import type { EntryOf } from './entry';
import type { JobState, Verdict } from './job-state';
import type { PlanStep } from './plan';

const SECOND_LOOK_MINUTES = 30;

function no(code: string, why: string, unlock?: string): Verdict {
  return { ok: false, code, why, ...(unlock === undefined ? {} : { unlock }) };
}

/** May this person sign this hold point? The digest and the PIN are the server's to check. */
export function whyNotSigned(state: JobState, step: PlanStep, entry: EntryOf<'signed'>): Verdict {
  if (step.kind !== 'hold') return no('wrong-step', 'Only a hold point is signed.');
  if (entry.data.holdPoint !== step.holdPoint)
    return no('wrong-step', 'The signature names another hold point.');
  if (!step.roles.some((role) => entry.author.roles.includes(role))) {
    return no(
      'role',
      `This hold point is signed by: ${step.roles.join(', ')}.`,
      'Ask someone who has the role.',
    );
  }
  if (step.presence === 'vehicle' && entry.data.presence !== 'at the vehicle') {
    return no('presence', 'This hold point is signed at the vehicle only.', 'Go to the vehicle and look.');
  }
  const independent = whyNotIndependent(state, step, entry);
  if (!independent.ok) return independent;
  if (step.counts && entry.data.count !== markCount(state)) {
    return no(
      'count-differs',
      "The signer's count and the record differ.",
      'Count again at the vehicle; if a mark is missing, raise a deviation.',
    );
  }
  return { ok: true };
}

/** How many heads carry their mark by the record. */
export function markCount(state: JobState): number {
  return Object.values(state.bolts).filter((bolt) => bolt.marked).length;
}

/** Who had a hand in what the hold point covers, helpers and correctors included. */
export function authorsUnder(state: JobState, step: PlanStep & { kind: 'hold' }): string[] {
  return [...new Set(step.covers.flatMap((id) => state.authors[id] ?? []))];
}

/** The author can't be the witness: no class A hold point over one's own work. */
function whyNotIndependent(
  state: JobState,
  step: PlanStep & { kind: 'hold' },
  entry: EntryOf<'signed'>,
): Verdict {
  if (step.class !== 'A' || !authorsUnder(state, step).includes(entry.by)) return { ok: true };
  if (!step.secondLook || entry.data.notIndependent === undefined) {
    return no('own-work', 'The signer had a hand in this work.', 'Someone who did none of it must sign.');
  }
  const last = step.covers
    .flatMap((id) => state.steps[id]?.entries ?? [])
    .filter((kept) => kept.by === entry.by || kept.with.includes(entry.by))
    .reduce((latest, kept) => Math.max(latest, Date.parse(kept.at)), 0);
  return Date.parse(entry.at) - last >= SECOND_LOOK_MINUTES * 60_000
    ? { ok: true }
    : no(
        'too-soon',
        `A second look comes at least ${SECOND_LOOK_MINUTES} minutes after one's own work.`,
        'Come back later.',
      );
}
