import { bytesOf, type Sha256 } from './canonical';
import { correctionClass, type CorrectionClass } from './correction-class';
import type { EntryData } from './entry';
import { findKept, stepOfEntry } from './job-kept';
import type { JobState, Kept, Signature } from './job-state';
import { findStep, type Plan, type StepOf } from './plan';

/** What a signature on the hold point covers: every entry on its steps, and every one that touches those. */
export function evidenceFor(
  state: JobState,
  holdStepId: string,
): { id: string; device: string; deviceSeq: number }[] {
  return evidenceKept(state, holdStepId).map(({ id, device, deviceSeq }) => ({ id, device, deviceSeq }));
}

/** The entries that a signature on the hold point covers, as the state remembers them. */
export function evidenceKept(state: JobState, holdStepId: string): Kept[] {
  const hold = findStep(state.plan, holdStepId);
  if (hold?.kind !== 'hold') return [];
  const covered = new Set(hold.covers);
  const evidence = new Map<string, Kept>();
  for (const stepId of covered) {
    for (const kept of state.steps[stepId]?.entries ?? []) evidence.set(kept.id, kept);
  }
  for (const kept of touching(state)) {
    const of = targetOf(kept, state);
    if (of !== undefined && evidence.has(of)) evidence.set(kept.id, kept);
  }
  return [...evidence.values()].filter((kept) => kept.by !== 'workshop');
}

/** SHA-256 over the sorted content hashes of the evidence, each on a line of its own. */
export function evidenceDigest(contentHashes: readonly string[], sha256: Sha256): string {
  return sha256(bytesOf([...contentHashes].sort().join('\n')));
}

/** Entries that may point at another: corrections, take-backs, revocations, dispositions. */
function touching(state: JobState): Kept[] {
  return state.unstepped.filter((kept) => targetOf(kept, state) !== undefined);
}

function targetOf(kept: Kept, state: JobState): string | undefined {
  if ('of' in kept.data && typeof kept.data.of === 'string') return kept.data.of;
  if (kept.kind === 'deviation-disposed' && 'deviation' in kept.data) {
    const id = kept.data.deviation;
    const known = state.deviations.some((deviation) => deviation.id === id);
    return known ? id.split(':')[0] : undefined;
  }
  return undefined;
}

/** Does this signature stand? One that the server has not checked yet stands for now. */
export function stands(signature: Signature): boolean {
  return signature.reopened === undefined;
}

/** The signature that stands on a hold point's step. */
export function findSignature(state: JobState, holdStepId: string): Signature | undefined {
  return state.signatures.findLast((signature) => signature.step === holdStepId && stands(signature));
}

/** Signed, and either checked by the server or on a route that lets work go on meanwhile. */
export function isPassed(state: JobState, hold: StepOf<'hold'>): boolean {
  const signature = findSignature(state, hold.id);
  return signature !== undefined && (signature.checkedAt !== undefined || hold.offline === 'proceed');
}

/** Hold points passed on a signature whose PIN nobody has checked yet: what follows is at risk. */
export function uncheckedSignatures(state: JobState): Signature[] {
  return state.signatures.filter((signature) => stands(signature) && signature.checkedAt === undefined);
}

/** Kinds that add to what a signer saw without changing what it says. */
const harmless = new Set<Kept['kind']>([
  'photographed',
  'signed',
  'witnessed',
  'countersigned',
  'work-signed',
  'took-over',
  'tool-taken',
]);

/** What a correction really is: what its rule says of the change, and never less than its author said. */
export function classOf(
  state: JobState,
  { of, class: claimed, data }: EntryData<'corrected'>,
): CorrectionClass {
  const before = findKept(state, of)?.data;
  const isMore = before !== undefined && correctionClass(before, data) === 'substantive';
  return isMore ? 'substantive' : claimed;
}

/** A new act on a step under a signature opens the hold point again. */
export function reopenSignatures(state: JobState, kept: Kept): JobState {
  if (harmless.has(kept.kind) || state.signatures.length === 0) return state;
  if (kept.kind === 'corrected' && classOf(state, kept.data as EntryData<'corrected'>) === 'clerical')
    return state;
  const touched = new Set([kept.step, stepTouched(state, kept)]);
  const isOver = ({ step }: Signature): boolean => {
    const hold = findStep(state.plan, step);
    return hold?.kind === 'hold' && hold.covers.some((id) => touched.has(id));
  };
  const did = kept.kind === 'corrected' ? 'corrected' : 'recorded';
  return openAgain(state, isOver, `${kept.name} ${did} something on what was signed`);
}

/** Opens the hold points of the signatures that stand and are meant, and notes what was done past each. */
export function openAgain(
  state: JobState,
  isMeant: (signature: Signature) => boolean,
  why: string,
): JobState {
  const open = state.signatures.filter((signature) => stands(signature) && isMeant(signature));
  if (open.length === 0) return state;
  const signatures = state.signatures.map((signature) => {
    if (!open.includes(signature)) return signature;
    const donePast = [...stepsPast(state.plan, signature.step)].filter((id) => isWorkedOn(state, id));
    return { ...signature, reopened: why, ...(donePast.length === 0 ? {} : { donePast }) };
  });
  const steps = { ...state.steps };
  for (const { step: id } of open) {
    const step = steps[id];
    if (step) steps[id] = { ...step, status: 'open' };
  }
  return { ...state, signatures, steps };
}

function isWorkedOn(state: JobState, stepId: string): boolean {
  const status = state.steps[stepId]?.status;
  return status === 'done' || status === 'begun';
}

const pastIndexes = new WeakMap<Plan, Map<string, ReadonlySet<string>>>();

/** The steps that lie behind a step: they need it, or need one that does. */
export function stepsPast(plan: Plan, stepId: string): ReadonlySet<string> {
  const index = pastIndexes.get(plan) ?? new Map<string, ReadonlySet<string>>();
  pastIndexes.set(plan, index);
  const held = index.get(stepId);
  if (held) return held;
  const past = new Set<string>();
  // Every need points backwards in the plan, so one walk finds them all.
  for (const { id, needs } of plan.steps)
    if (needs.some((need) => need === stepId || past.has(need))) past.add(id);
  index.set(stepId, past);
  return past;
}

/** The hold point past which a step was done before it was opened again; it stays so after it is signed anew. */
export function donePast(state: JobState, stepId: string): Signature | undefined {
  return state.signatures.findLast((signature) => signature.donePast?.includes(stepId));
}

/** How it is said of a step everywhere. */
export const DONE_PAST = 'done past a hold point that was opened again';

/** The step that an entry is about, also through a disposition or a correction of something on it. */
export function stepTouched(state: JobState, kept: Kept): string | undefined {
  const seen = new Set([kept.id]);
  for (let of = targetOf(kept, state); of !== undefined && !seen.has(of);) {
    const step = stepOfEntry(state, of);
    if (step !== undefined) return step;
    seen.add(of);
    const about = findKept(state, of);
    of = about && targetOf(about, state);
  }
  return undefined;
}
