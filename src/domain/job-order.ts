/*
 * What may come next. Order is enforced where it matters and free where it doesn't: a step that can't be
 * done yet says why, and what would unlock it.
 */
import { correctionOver, dueCountersigns } from './job-countersign';
import { isBlocked } from './job-deviation';
import { findSignature, stepsPast, uncheckedSignatures } from './job-evidence';
import type { JobState, OpenItem, Verdict } from './job-state';
import { findStep, type Gate, type Plan, type PlanStep } from './plan';

const OK: Verdict = { ok: true };

function no(code: string, why: string, unlock?: string): Verdict {
  return { ok: false, code, why, ...(unlock === undefined ? {} : { unlock }) };
}

/** Does the step stand in nobody's way any more? */
export function isSatisfied(state: JobState, stepId: string): boolean {
  const step = findStep(state.plan, stepId);
  if (!step || step.onDemand === true || step.kind === 'witness') return true;
  const status = state.steps[stepId]?.status;
  return (status === 'done' || status === 'not applicable') && !isBlocked(state, stepId);
}

/**
 * The steps that can be done now, in the order of the plan; the first is the one to show. An invitation to
 * look that work has gone past stands last.
 */
export function nextSteps(state: JobState): PlanStep[] {
  const open = openSteps(state);
  const isPassed = (step: PlanStep): boolean => step.kind === 'witness' && hasWorkAfter(state, step);
  return [...open.filter((step) => !isPassed(step)), ...open.filter(isPassed)];
}

function hasWorkAfter(state: JobState, step: PlanStep): boolean {
  const at = state.plan.steps.indexOf(step);
  return state.plan.steps.some(
    (later, i) => i > at && later.onDemand !== true && state.steps[later.id]?.status !== 'open',
  );
}

function openSteps(state: JobState): PlanStep[] {
  return state.plan.steps.filter((step) => {
    if (step.onDemand === true) return false;
    const status = state.steps[step.id]?.status;
    if (status === 'done' || status === 'not applicable' || status === 'waiting for a part') return false;
    return whyNot(state, step.id).ok;
  });
}

/** Why this step can't be done now, and what would unlock it. */
export function whyNot(state: JobState, stepId: string): Verdict {
  const step = findStep(state.plan, stepId);
  if (!step) return no('unknown-step', 'This step is not in the plan of the job.');
  const running = whyNotRunning(state, step);
  if (!running.ok) return running;
  const missing = step.needs.find((need) => !isSatisfied(state, need));
  if (missing !== undefined) return whyNeedIsMissing(state, missing);
  const past = whyNotPast(state, step);
  if (!past.ok) return past;
  if (step.kind === 'tighten') return whyNotDisputed(state, step);
  if (step.kind === 'turn') return whyNotTurn(state);
  if (step.moves === true) return whyItemsBar(state, 'move', 'The vehicle may not be lowered or moved');
  if (step.kind === 'hold') return whyNotHold(state, step);
  if (step.kind === 'hand-over') return whyNotHandOver(state);
  return OK;
}

function whyNotRunning(state: JobState, step: PlanStep): Verdict {
  switch (state.phase) {
    case 'not opened':
      return no('not-opened', 'The job has not been opened.');
    case 'handed over':
      return no('handed-over', 'The job is handed over.');
    case 'ended unfinished':
      return no('ended', 'The job was ended unfinished.');
    case 'parked':
      return step.kind === 'resume'
        ? OK
        : no('parked', 'The vehicle is parked, made safe.', 'Resume the job first.');
    case 'running':
      return step.kind === 'resume' ? no('not-parked', 'The job is running.') : OK;
  }
}

/** Nothing new is begun behind a hold point that was opened again; what was begun there may be brought to its end. */
function whyNotPast(state: JobState, step: PlanStep): Verdict {
  if (step.onDemand === true || state.steps[step.id]?.status === 'begun') return OK;
  const open = state.signatures.find(
    (signature) =>
      signature.reopened !== undefined &&
      stepsPast(state.plan, signature.step).has(step.id) &&
      !findSignature(state, signature.step),
  );
  if (!open) return OK;
  const title = findStep(state.plan, open.step)?.title ?? open.holdPoint;
  return no(
    'unsigned',
    `The hold point "${title}" was opened again and is not signed.`,
    'It must be signed again first.',
  );
}

/** What two tablets did to the same bolts is looked at before anybody turns one of them further. */
function whyNotDisputed(state: JobState, step: PlanStep): Verdict {
  const open = state.deviations.find((d) => d.rule === 'conflict' && !d.disposed && d.step === step.id);
  return open
    ? no(
        'deviation-open',
        `A deviation is open here: ${sentence(open.words)}`,
        'The supervisor disposes of it.',
      )
    : OK;
}

function whyNeedIsMissing(state: JobState, needId: string): Verdict {
  const need = findStep(state.plan, needId);
  const title = need?.title ?? needId;
  if (state.steps[needId]?.status === 'waiting for a part') {
    return no('waiting-for-part', `"${title}" waits for a part.`, `When the part is there, do "${title}".`);
  }
  const deviation = state.deviations.find((d) => d.blocks && !d.disposed && d.step === needId);
  if (deviation) {
    return no(
      'deviation-open',
      `A deviation is open on "${title}": ${sentence(deviation.words)}`,
      wayOut(state, deviation),
    );
  }
  if (need?.kind === 'hold')
    return no('unsigned', `The hold point "${title}" is not signed.`, 'It must be signed first.');
  return no('order', `"${title}" comes first.`, `Do "${title}".`);
}

/** The crank knows its state: a rod without its cap, a dry shell or laid thread forbids the turn. */
export function whyNotTurn(state: JobState): Verdict {
  for (const rod of Object.values(state.rods)) {
    if (rod.cap === 'off')
      return no('cap-off', `The cap of rod ${rod.rod} is off.`, `Fit the cap of rod ${rod.rod}.`);
    if (rod.thread === 'laid')
      return no('thread-laid', `Thread is laid at rod ${rod.rod}.`, `Read it and clean it off.`);
    if (rod.shells === 'dry')
      return no('dry-shell', `The shells of rod ${rod.rod} are dry.`, `Oil them first.`);
  }
  return OK;
}

/** The open items that bar going through this gate. */
export function itemsBarring(state: JobState, gate: Gate): OpenItem[] {
  return state.open.filter((open) => planItem(state.plan, open.item)?.bars.includes(gate));
}

function planItem(plan: Plan, id: string): Plan['items'][number] | undefined {
  return plan.items.find((item) => item.id === id);
}

function whyItemsBar(state: JobState, gate: Gate, what: string): Verdict {
  const [first, ...others] = itemsBarring(state, gate);
  if (!first) return OK;
  const rest = others.length === 0 ? '' : ` and ${others.length} more`;
  const closes = planItem(state.plan, first.item)?.closes;
  const step = closes === undefined ? undefined : findStep(state.plan, closes);
  return no(
    'open-item',
    `${what}: still open is ${first.name}${rest}.`,
    step ? `Do "${step.title}".` : undefined,
  );
}

function whyNotHold(state: JobState, step: PlanStep & { kind: 'hold' }): Verdict {
  const unsatisfied = step.covers.find((id) => !isSatisfied(state, id) && id !== step.id);
  if (unsatisfied !== undefined) return whyNeedIsMissing(state, unsatisfied);
  if (step.gate === undefined) return OK;
  const barred = whyItemsBar(state, step.gate, `"${step.title}" can't be signed`);
  if (!barred.ok || step.gate !== 'start') return barred;
  const open = openBlockers(state).find((d) => d.class !== 'C');
  return open
    ? no('deviation-open', `A deviation is open: ${sentence(open.words)}`, wayOut(state, open))
    : OK;
}

function whyNotHandOver(state: JobState): Verdict {
  const items = whyItemsBar(state, 'handover', 'The vehicle may not be handed over');
  if (!items.ok) return items;
  const [unchecked] = uncheckedSignatures(state);
  if (unchecked) {
    return no(
      'unchecked',
      `The signature on "${unchecked.holdPoint}" has not been checked yet.`,
      'Bring the tablet to the network.',
    );
  }
  if (dueCountersigns(state).some(({ deviations }) => deviations === undefined)) {
    return no(
      'countersign',
      'A correction under a signature has not been countersigned.',
      'Someone else countersigns it.',
    );
  }
  const [open] = openBlockers(state);
  if (open) return no('deviation-open', `A deviation is open: ${sentence(open.words)}`, wayOut(state, open));
  const missing = state.plan.steps.find((s) => s.kind !== 'hand-over' && !isSatisfied(state, s.id));
  return missing ? whyNeedIsMissing(state, missing.id) : OK;
}

/** Deviations that block and wait for a disposition. */
export function openBlockers(state: JobState): JobState['deviations'] {
  return state.deviations.filter((deviation) => deviation.blocks && !deviation.disposed);
}

/** What takes an open deviation out of the way: a disposition, or a countersign where its value was corrected. */
export function wayOut(state: JobState, { id }: JobState['deviations'][number]): string {
  return correctionOver(state, id) === undefined
    ? 'The supervisor disposes of it.'
    : 'Its value was corrected since: a supervisor or the quality lead countersigns that on the page of the job, or disposes of the deviation.';
}

/** Words with a full stop at their end, if they have none. */
export function sentence(words: string): string {
  return /[.!?]$/.test(words) ? words : `${words}.`;
}
