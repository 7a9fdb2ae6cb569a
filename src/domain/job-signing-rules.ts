import type { EntryOf } from './entry';
import { evidenceKept } from './job-evidence';
import type { JobState, Kept, Verdict, Workshop } from './job-state';
import { isUnsignedWork, unsignedWords } from './job-work';
import type { PlanStep } from './plan';

const SECOND_LOOK_MINUTES = 30;

function no(code: string, why: string, unlock?: string): Verdict {
  return { ok: false, code, why, ...(unlock === undefined ? {} : { unlock }) };
}

/** May this person sign this hold point? The digest and the PIN are the server's to check. */
export function whyNotSigned(
  state: JobState,
  step: PlanStep,
  entry: EntryOf<'signed'>,
  workshop: Pick<Workshop, 'people'>,
): Verdict {
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
  return whyNotOverUnsigned(state, step, workshop);
}

/** A class A hold point is not signed over work that nobody has put their own name to. */
function whyNotOverUnsigned(
  state: JobState,
  step: PlanStep & { kind: 'hold' },
  workshop: Pick<Workshop, 'people'>,
): Verdict {
  const [first] = unsignedUnder(state, step, workshop);
  return first === undefined
    ? { ok: true }
    : no(
        'unsigned-work',
        unsignedWords(first.name, first.entries.length),
        `${first.name} signs for it first, on any tablet: touch the name at the top.`,
      );
}

/**
 * Whose work a class A hold point covers that they have not signed as theirs. Somebody who has left the workshop
 * can't sign any more, and their entries carry the signature of their key all the same.
 */
export function unsignedUnder(
  state: JobState,
  step: PlanStep & { kind: 'hold' },
  { people }: Pick<Workshop, 'people'>,
): { by: string; name: string; entries: Kept[] }[] {
  if (step.class !== 'A') return [];
  const authors = new Map<string, { by: string; name: string; entries: Kept[] }>();
  for (const kept of evidenceKept(state, step.id)) {
    if (!isUnsignedWork(state, kept)) continue;
    if (people.find(({ id }) => id === kept.by)?.active === false) continue;
    const author = authors.get(kept.by) ?? { by: kept.by, name: kept.name, entries: [] };
    author.entries.push(kept);
    authors.set(kept.by, author);
  }
  return [...authors.values()];
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
