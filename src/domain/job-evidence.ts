import { bytesOf, type Sha256 } from './canonical';
import type { JobState, Kept, Signature } from './job-state';
import { findStep, type StepOf } from './plan';

/** What a signature on the hold point covers: every entry on its steps, and every one that touches those. */
export function evidenceFor(
  state: JobState,
  holdStepId: string,
): { id: string; device: string; deviceSeq: number }[] {
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
  return [...evidence.values()]
    .filter((kept) => kept.by !== 'workshop')
    .map(({ id, device, deviceSeq }) => ({ id, device, deviceSeq }));
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

/** A new act on a step under a signature opens the hold point again. */
export function reopenSignatures(state: JobState, kept: Kept): JobState {
  if (harmless.has(kept.kind) || state.signatures.length === 0) return state;
  if (kept.kind === 'corrected' && 'class' in kept.data && kept.data.class === 'clerical') return state;
  const touched = kept.step ?? stepTouched(state, kept);
  if (touched === undefined) return state;
  const signatures = state.signatures.map((signature) => {
    const hold = findStep(state.plan, signature.step);
    if (!stands(signature) || hold?.kind !== 'hold' || !hold.covers.includes(touched)) return signature;
    return { ...signature, reopened: `${kept.name} recorded something on what was signed` };
  });
  if (signatures.every((signature, i) => signature === state.signatures[i])) return state;
  const steps = { ...state.steps };
  for (const signature of signatures) {
    const step = steps[signature.step];
    if (signature.reopened !== undefined && step) steps[signature.step] = { ...step, status: 'open' };
  }
  return { ...state, signatures, steps };
}

function stepTouched(state: JobState, kept: Kept): string | undefined {
  const of = targetOf(kept, state);
  if (of === undefined) return undefined;
  for (const [stepId, step] of Object.entries(state.steps)) {
    if (step.entries.some((entry) => entry.id === of)) return stepId;
  }
  return undefined;
}
