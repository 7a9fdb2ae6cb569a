/*
 * What a step's entries amount to. After an entry the steps that it touches are settled: their status,
 * and what the status changes on rods, bolts, open items, tallies, lots and deviations.
 */
import type { EntryData } from './entry';
import { settleClearance } from './job-clearance';
import { isBlocked, raiseDeviation } from './job-deviation';
import { findSignature, isPassed } from './job-evidence';
import { activeEntries, asGround, lastOf } from './job-kept';
import { judgeLimit } from './job-limit';
import type { JobState, Kept, StepState, StepStatus } from './job-state';
import { writable } from './job-tables';
import { isProgrammeDone, settleBolts } from './job-tightening';
import { settleGraded } from './job-wear';
import { findStep, type Plan, type PlanItem, type PlanStep, type StepOf } from './plan';

/** Settles these steps, and those that close what they opened. */
export function settleSteps(state: JobState, stepIds: readonly string[]): JobState {
  let next = state;
  for (const id of stepIds) {
    const step = findStep(next.plan, id);
    if (step) next = settleStep(next, step);
  }
  return next;
}

function settleStep(state: JobState, step: PlanStep): JobState {
  const before = state.steps[step.id]?.status ?? 'open';
  let next = settleOwn(state, step);
  const after = statusOf(next, step);
  if (after !== before) {
    const present = next.steps[step.id];
    if (present) next = withStatus(next, step.id, { ...present, status: after });
  }
  next = settleEffects(next, step, before, after);
  return settleItems(next, step);
}

function withStatus(state: JobState, stepId: string, step: StepState): JobState {
  const steps = writable(state, state.steps);
  steps[stepId] = step;
  return { ...state, steps };
}

/** What each kind of step changes beside its status. */
function settleOwn(state: JobState, step: PlanStep): JobState {
  const own = state.steps[step.id];
  switch (step.kind) {
    case 'turn': {
      const turned = lastOf(own, 'turned');
      return turned?.data.toAngle === undefined ? state : { ...state, crankAngle: turned.data.toAngle };
    }
    case 'count':
      return settleCount(state, step);
    case 'inspect':
      return settleChecks(state, step, lastOf(own, 'inspected'));
    case 'read':
      return settleRead(state, step);
    case 'choose-shells': {
      const chosen = lastOf(own, 'chose-shells');
      const rod = step.rod === undefined ? undefined : state.rods[step.rod];
      if (!rod || !chosen) return state;
      const { upper, lower, predicted } = chosen.data;
      return { ...state, rods: { ...state.rods, [rod.rod]: { ...rod, upper, lower, predicted } } };
    }
    case 'grade-shells':
      return settleGraded(state, step);
    case 'gauge':
      return settleClearance(state, step);
    case 'tighten':
      return settleBolts(state, step);
    case 'fit':
      return noteLot(state, step.part, lastOf(own, 'fitted')?.data.lot);
    case 'refit':
      return step.part === undefined ? state : noteLot(state, step.part, lastOf(own, 'refitted')?.data.lot);
    case 'photograph':
      return state;
    case 'watch':
      return settleWatch(state, step);
    case 'drive': {
      const after = lastOf(own, 'drive-ended');
      return settleChecks(state, step, after ?? lastOf(own, 'drive-started'));
    }
    case 'hold':
      return settleSignatures(state, step);
    case 'make-safe':
      return lastOf(own, 'parked') && state.phase === 'running' && isNewest(state, own)
        ? { ...state, phase: 'parked' }
        : state;
    case 'resume':
      return lastOf(own, 'resumed') && state.phase === 'parked' && isNewest(state, own)
        ? { ...state, phase: 'running' }
        : state;
    case 'hand-over':
      return lastOf(own, 'handed-over') ? { ...state, phase: 'handed over' } : state;
    default:
      return state;
  }
}

function isNewest(state: JobState, own: StepState | undefined): boolean {
  return own?.entries.at(-1)?.id === state.lastEntry;
}

/** The status that a step's entries give it. */
function statusOf(state: JobState, step: PlanStep): StepStatus {
  const own = state.steps[step.id];
  const active = activeEntries(own);
  const wayOut = active.findLast(
    (k) => k.kind === 'not-applicable' || k.kind === 'waiting-for-part' || k.kind === 'part-arrived',
  );
  if (wayOut?.kind === 'not-applicable') return 'not applicable';
  if (isClosedByNotApplicable(state, step)) return 'not applicable';
  if (isStepDone(state, step)) return 'done';
  if (wayOut?.kind === 'waiting-for-part') return 'waiting for a part';
  // A signature that no longer stands leaves its hold point as it was before.
  const isBegun =
    step.kind === 'hold'
      ? findSignature(state, step.id) !== undefined
      : active.some((kept) => kept.kind !== 'part-arrived' && kept.kind !== 'photographed');
  return isBegun ? 'begun' : 'open';
}

function isStepDone(state: JobState, step: PlanStep): boolean {
  const own = state.steps[step.id];
  switch (step.kind) {
    case 'do':
      return lastOf(own, 'done') !== undefined;
    case 'remove':
      return lastOf(own, 'removed') !== undefined;
    case 'refit':
      return lastOf(own, 'refitted') !== undefined;
    case 'place':
      return lastOf(own, 'placed') !== undefined;
    case 'count':
      return lastOf(own, 'counted') !== undefined;
    case 'inspect':
      return lastOf(own, 'inspected') !== undefined;
    case 'read':
      return lastOf(own, 'read') !== undefined;
    case 'turn':
      return lastOf(own, 'turned') !== undefined;
    case 'choose-shells':
      return lastOf(own, 'chose-shells') !== undefined;
    case 'grade-shells':
      return lastOf(own, 'graded') !== undefined;
    case 'gauge':
      return isGauged(state, step);
    case 'tighten':
      return isProgrammeDone(state, step);
    case 'fit':
      return lastOf(own, 'fitted') !== undefined;
    case 'fill':
      return lastOf(own, 'filled') !== undefined;
    case 'photograph':
      return lastOf(own, 'photographed') !== undefined;
    case 'watch':
      return lastOf(own, 'watch-ended') !== undefined;
    case 'drive':
      return lastOf(own, 'drive-ended') !== undefined;
    case 'hold':
      return isPassed(state, step);
    case 'witness':
      return lastOf(own, 'witnessed') !== undefined;
    case 'make-safe':
    case 'resume':
      return false;
    case 'hand-over':
      return lastOf(own, 'handed-over') !== undefined;
  }
}

/** Both ends read, and each inside its limits or accepted by who may. */
function isGauged(state: JobState, step: StepOf<'gauge'>): boolean {
  const rod = step.rod === undefined ? undefined : state.rods[step.rod];
  if (!rod?.front || !rod.rear) return false;
  return [rod.front, rod.rear].every(
    (reading) =>
      reading.verdict === 'inside' ||
      state.deviations.some(
        (d) =>
          d.id.startsWith(`${reading.correction ?? reading.entry}:`) &&
          d.disposed?.disposition === 'accept as is',
      ),
  );
}

function settleCount(state: JobState, step: StepOf<'count'>): JobState {
  const counted = lastOf(state.steps[step.id], 'counted');
  if (!counted) return state;
  const present = state.tallies[step.tally] ?? { out: 0 };
  const tally =
    step.side === 'out' ? { ...present, out: counted.data.count } : { ...present, in: counted.data.count };
  const next = { ...state, tallies: { ...state.tallies, [step.tally]: tally } };
  if (step.side === 'out' || tally.in === tally.out) return next;
  return raiseDeviation(next, asGround(counted), {
    rule: 'count-differs',
    class: 'A',
    words: `${step.what}: ${tally.out} went out, ${counted.data.count} came back`,
    blocks: true,
  });
}

function settleChecks(
  state: JobState,
  step: PlanStep,
  kept: (Kept & { data: { checks: { id: string; ok: boolean; note?: string | undefined }[] } }) | undefined,
): JobState {
  const bad = kept?.data.checks.filter((check) => !check.ok) ?? [];
  if (!kept || bad.length === 0) return state;
  const asked = 'checks' in step ? step.checks : step.kind === 'drive' ? [...step.before, ...step.after] : [];
  const words = bad.map((check) => {
    const ask = asked.find(({ id }) => id === check.id)?.ask ?? check.id;
    return `Not in order: ${ask}${check.note === undefined ? '' : ` (${check.note})`}`;
  });
  return raiseDeviation(state, asGround(kept), {
    rule: 'not-in-order',
    class: step.class,
    words: words.join('; '),
    blocks: true,
  });
}

function settleRead(state: JobState, step: StepOf<'read'>): JobState {
  const kept = lastOf(state.steps[step.id], 'read');
  const limit = state.plan.limits[step.limit];
  if (!kept || !limit) return state;
  const { verdict } = judgeLimit(limit, kept.data.value, limit.uncertainty ?? '0');
  if (verdict === 'inside') return state;
  const { value, unit } = kept.data;
  return raiseDeviation(state, asGround(kept), {
    rule: verdict === 'outside' ? 'limit-outside' : verdict === 'unsure' ? 'limit-unsure' : 'no-limit-known',
    class: step.class,
    words: `${limit.title}: ${value} ${unit} is ${verdict === 'no limit known' ? 'read, and no limit is known' : verdict}`,
    blocks: true,
  });
}

function settleWatch(state: JobState, step: StepOf<'watch'>): JobState {
  const own = state.steps[step.id];
  const started = lastOf(own, 'watch-started');
  const ended = lastOf(own, 'watch-ended');
  let next: JobState = state;
  if (started && !ended) next = { ...next, watch: { step: step.id, startedAt: started.at } };
  else if (next.watch?.step === step.id) next = { ...next, watch: undefined };
  for (const kept of activeEntries(own)) {
    if (kept.kind !== 'watch-checked') continue;
    const data = kept.data as EntryData<'watch-checked'>;
    const check = step.checks.find(({ id }) => id === data.check);
    if (data.ok || !check) continue;
    const what =
      check.ask ??
      (check.limit === undefined ? data.check : next.plan.limits[check.limit]?.title) ??
      data.check;
    const words = `${check.stop === true ? 'Stop: ' : ''}${what}${data.value === undefined ? '' : `, ${data.value} ${data.unit ?? ''}`}`;
    next = raiseDeviation(next, asGround(kept), {
      rule: 'watch-bad',
      class: step.class,
      words,
      blocks: true,
    });
  }
  if (ended?.data.early === true) {
    const words = `Ended early: ${ended.data.reason ?? 'no reason given'}`;
    next = raiseDeviation(next, ended, { rule: 'watch-early', class: step.class, words, blocks: true });
  }
  return next;
}

function noteLot(state: JobState, part: string, lot: string | undefined): JobState {
  if (lot === undefined) return state;
  const known = state.lots[part] ?? [];
  return known.includes(lot) ? state : { ...state, lots: { ...state.lots, [part]: [...known, lot] } };
}

function settleSignatures(state: JobState, step: StepOf<'hold'>): JobState {
  let next = state;
  for (const kept of activeEntries(state.steps[step.id])) {
    if (kept.kind !== 'signed') continue;
    const present = next.signatures.find((signature) => signature.entry === kept.id);
    if (present) continue;
    const data = kept.data as EntryData<'signed'>;
    next = {
      ...next,
      signatures: [
        ...next.signatures,
        {
          entry: kept.id,
          holdPoint: step.holdPoint,
          step: step.id,
          by: kept.by,
          name: data.name,
          at: kept.at,
          meaning: data.meaning,
          count: data.count,
          presence: data.presence,
          covered: data.covers.count,
          digest: data.covers.digest,
          upTo: data.covers.upTo,
          checkedAt: kept.pinCheckedAt,
          notIndependent: data.notIndependent,
          certificate: data.certificate,
        },
      ],
    };
  }
  return next;
}

/** Whether the step has changed its rod: a reading has from its first end on, which is read with the cap off. */
function hasEffect(step: PlanStep, status: StepStatus): boolean {
  return status === 'done' || (step.kind === 'gauge' && status === 'begun');
}

/** A done step changes the rod; one that is no longer done changes nothing back by itself. */
function settleEffects(state: JobState, step: PlanStep, before: StepStatus, after: StepStatus): JobState {
  const { rod, sets } = step;
  let next = state;
  const last = activeEntries(state.steps[step.id]).at(-1);
  if (sets && rod !== undefined && hasEffect(step, after) && !hasEffect(step, before) && last) {
    next = { ...next, effects: [...next.effects, { entry: last.id, rod, sets }] };
  }
  if (rod === undefined || (next.effects === state.effects && !sets)) return next;
  const present = next.rods[rod];
  if (!present) return next;
  let { cap, shells, thread }: Pick<typeof present, 'cap' | 'shells' | 'thread'> = {
    cap: 'on',
    shells: 'old',
    thread: 'none',
  };
  for (const effect of next.effects) {
    if (effect.rod !== rod) continue;
    cap = effect.sets.cap ?? cap;
    shells = effect.sets.shells ?? shells;
    if (effect.sets.thread !== undefined) thread = effect.sets.thread === 'laid' ? 'laid' : 'none';
  }
  return { ...next, rods: { ...next.rods, [rod]: { ...present, cap, shells, thread } } };
}

const itemIndexes = new WeakMap<Plan, Map<string, PlanItem[]>>();

function itemsAt(plan: Plan, stepId: string): PlanItem[] {
  let index = itemIndexes.get(plan);
  if (!index) {
    index = new Map();
    for (const item of plan.items) {
      for (const step of [item.opens, item.closes]) index.set(step, [...(index.get(step) ?? []), item]);
    }
    itemIndexes.set(plan, index);
  }
  return index.get(stepId) ?? [];
}

/** Open from the step that opens it to the step that closes it. */
function settleItems(state: JobState, step: PlanStep): JobState {
  let next = state;
  for (const item of itemsAt(state.plan, step.id)) {
    const opener = next.steps[item.opens];
    const isOpen = opener?.status === 'done' && !isSatisfiedClose(next, item);
    const isListed = next.open.some((open) => open.item === item.id);
    if (isOpen && !isListed) {
      const kept = activeEntries(opener).at(-1);
      const data = kept?.data as { count?: number; into?: string } | undefined;
      next = {
        ...next,
        open: [
          ...next.open,
          {
            item: item.id,
            name: item.name,
            how: item.how,
            since: kept?.at ?? '',
            step: item.opens,
            count: data?.count,
            into: data?.into,
          },
        ],
      };
    } else if (!isOpen && isListed) {
      next = { ...next, open: next.open.filter((open) => open.item !== item.id) };
    }
    if (item.opens === step.id) next = settleClosing(next, item);
  }
  return next;
}

function isSatisfiedClose(state: JobState, item: PlanItem): boolean {
  const status = state.steps[item.closes]?.status;
  return (status === 'done' || status === 'not applicable') && !isBlocked(state, item.closes);
}

/** What was never taken off need not go on again: the closing step follows its opening one. */
function settleClosing(state: JobState, item: PlanItem): JobState {
  const closing = findStep(state.plan, item.closes);
  const present = state.steps[item.closes];
  if (!closing || !present) return state;
  const status = statusOf(state, closing);
  return status === present.status ? state : withStatus(state, closing.id, { ...present, status });
}

function isClosedByNotApplicable(state: JobState, step: PlanStep): boolean {
  return itemsAt(state.plan, step.id).some(
    (item) => item.closes === step.id && state.steps[item.opens]?.status === 'not applicable',
  );
}
