/*
 * Whether a compiled plan can be worked through and ends with everything where it belongs: what comes off
 * goes on again, the crank never turns on an open rod, each class A tightening is seen by a second person.
 */
import { isAbove } from './check-engine';
import type { Gate, Plan, PlanStep, RodEffects, StepOf } from './plan';
import type { LooseEnd } from './plan-items';

/** Tells of something wrong at a step of the plan, by the step's id. */
export type TellAt = (stepId: string, message: string, mend: string) => void;
/** Tells of something wrong on the engine sheet. */
export type TellSheet = (path: readonly PropertyKey[], message: string, mend: string) => void;

/** Checks one compiled plan. */
export function checkPlan(plan: Plan, looseEnds: LooseEnd[], tell: TellAt, tellSheet: TellSheet): void {
  checkLooseEnds(looseEnds, tell);
  checkOneUse(plan, tell);
  checkRods(plan, tell);
  checkOpenList(plan, tell);
  checkWitnessed(plan, tell);
  checkMarks(plan, tell, tellSheet);
  checkTightenings(plan, tell);
  checkCard(plan, tellSheet);
  checkWatches(plan, tell);
}

const looseWords: Record<LooseEnd['why'], [message: string, mend: string]> = {
  'never refitted': ['is taken off and never goes on again', 'Add a "refit" step for it further on.'],
  'never taken out': ['is put in and never comes out again', 'Add a "remove" step for it further on.'],
  'never counted in': [
    'is counted out and never counted back',
    'Add a "count" step with "side: in" further on.',
  ],
  'refitted but not taken off': [
    'is refitted but was not taken off before',
    'Add its "remove" step, or correct the item.',
  ],
  'counted in but not out': [
    'is counted back but was not counted out before',
    'Add its "count" step with "side: out".',
  ],
  'opened twice': [
    'is opened twice before it is closed',
    'Close it first, or give one of the two another name.',
  ],
};

function checkLooseEnds(looseEnds: LooseEnd[], tell: TellAt): void {
  for (const { step, item, why } of looseEnds) {
    const [message, mend] = looseWords[why];
    tell(step, `"${item.split('@')[0] ?? item}" ${message}.`, mend);
  }
}

function checkOneUse(plan: Plan, tell: TellAt): void {
  const steps = new Map(plan.steps.map((step) => [step.id, step]));
  for (const item of plan.items) {
    const opens = steps.get(item.opens);
    const closes = steps.get(item.closes);
    if (opens?.kind !== 'remove' || opens.oneUse !== true || closes?.kind !== 'refit') continue;
    if (closes.part === undefined) {
      tell(
        closes.id,
        `"${item.name}" serves once, but its refit names no new part.`,
        'Add "part" with the new part whose lot is asked.',
      );
    }
  }
}

interface RodNow {
  cap: NonNullable<RodEffects['cap']>;
  shells: NonNullable<RodEffects['shells']>;
  thread: NonNullable<RodEffects['thread']>;
}

/** Walks through the plan and keeps the state of each rod, as a technician would leave it. */
function checkRods(plan: Plan, tell: TellAt): void {
  const rods = new Map<number, RodNow>();
  const now = (rod: number): RodNow => rods.get(rod) ?? { cap: 'on', shells: 'oiled', thread: 'gone' };
  for (const step of plan.steps) {
    if (step.onDemand) continue;
    if (step.kind === 'turn') {
      const open = [...rods].find(([, rod]) => whyOpen(rod) !== undefined);
      if (open) {
        const why = whyOpen(open[1]) ?? '';
        tell(
          step.id,
          `The crank turns in "${step.id.split('@')[0] ?? ''}" while rod ${open[0]} is left with ${why}.`,
          'Close every rod before the turn: cap on, shells oiled, thread gone.',
        );
      }
    }
    if (step.rod === undefined) continue;
    // A reading takes the cap off first, and a fit puts it on first: what such a step sets holds while it is done.
    const rod = { ...now(step.rod), ...(setsFirst(step) ? step.sets : {}) };
    if (step.kind === 'gauge' && (rod.cap === 'on' || rod.thread === 'gone')) {
      tell(
        step.id,
        'The thread is read while none is laid or the cap is on.',
        'Lay the thread, squeeze it and take the cap off before the reading.',
      );
    }
    if (step.kind === 'tighten' && step.fit !== 'joint' && rod.cap === 'off') {
      tell(
        step.id,
        'Bolts are tightened while the cap is off.',
        'Put the cap on in a step before this one, with "sets: { cap: on }".',
      );
    }
    if (
      step.kind === 'tighten' &&
      step.fit === 'final' &&
      (rod.shells !== 'oiled' || rod.thread === 'laid')
    ) {
      tell(
        step.id,
        'The final fit is made on a dry shell or on laid thread.',
        'Clean and oil the shells before the final fit.',
      );
    }
    rods.set(step.rod, { ...rod, ...step.sets });
  }
  const last = plan.steps.findLast(({ rod, sets }) => rod !== undefined && sets !== undefined);
  const open = [...rods].find(([, rod]) => whyOpen(rod) !== undefined);
  if (open && last) {
    tell(
      last.id,
      `At the end of the route rod ${open[0]} is left with ${whyOpen(open[1]) ?? ''}.`,
      'Close every rod: cap on, shells oiled, thread gone.',
    );
  }
}

function setsFirst(step: PlanStep): boolean {
  return step.kind === 'gauge' || step.kind === 'tighten';
}

function whyOpen({ cap, shells, thread }: RodNow): string | undefined {
  if (cap === 'off') return 'its cap off';
  if (thread === 'laid') return 'thread laid';
  return shells === 'oiled' ? undefined : shells === 'dry' ? 'dry shells' : 'no shells';
}

/** A gate that the open list would bar for ever is no gate but a wall. */
function checkOpenList(plan: Plan, tell: TellAt): void {
  const position = new Map(plan.steps.map(({ id }, index) => [id, index]));
  for (const step of plan.steps) {
    const gate = gateOf(step);
    if (gate === undefined || step.onDemand) continue;
    const at = position.get(step.id) ?? 0;
    const open = plan.items.find(
      ({ opens, closes, bars }) =>
        bars.includes(gate) && (position.get(opens) ?? 0) < at && (position.get(closes) ?? 0) > at,
    );
    if (!open) continue;
    tell(
      step.id,
      `"${open.name}" is still open here and bars this step (${gate}).`,
      `Close it before this step, in "${open.closes.split('@')[0] ?? ''}", or take "${gate}" out of what it bars.`,
    );
  }
}

function gateOf(step: PlanStep): Gate | undefined {
  if (step.moves) return 'move';
  if (step.kind === 'hold') return step.gate;
  return step.kind === 'hand-over' ? 'handover' : undefined;
}

function checkWitnessed(plan: Plan, tell: TellAt): void {
  plan.steps.forEach((step, index) => {
    if (step.kind !== 'tighten' || step.class !== 'A' || (step.fit !== 'final' && step.fit !== 'joint'))
      return;
    const isSeen = plan.steps
      .slice(index)
      .some((later) => later.kind === 'hold' && later.covers.includes(step.id));
    if (!isSeen) {
      tell(
        step.id,
        'This class A tightening is followed by no hold point that covers it.',
        'Add a hold point after it, or name it in the "covers" of one.',
      );
    }
  });
}

/** The paint mark of a rod cap says "done", so it comes last and not before. */
function checkMarks(plan: Plan, tell: TellAt, tellSheet: TellSheet): void {
  for (const step of plan.steps) {
    if (step.kind !== 'tighten' || step.fit !== 'final') continue;
    const cycles = plan.programmes[step.programme]?.cycles ?? [];
    const last = cycles.at(-1)?.at(-1);
    if (last?.kind !== 'mark') {
      const at = ['programmes', step.programme, 'cycles', Math.max(0, cycles.length - 1)];
      tellSheet(
        at,
        `The final fit by "${step.programme}" doesn't end with a paint mark.`,
        'Add "kind: mark" as the last stage of its last cycle.',
      );
    }
    if (step.class !== 'A') tell(step.id, 'The final fit of a rod cap is of class A.', 'Write "class: A".');
  }
}

function checkTightenings(plan: Plan, tell: TellAt): void {
  const used = new Map<string, number>();
  for (const step of plan.steps) {
    if (step.kind !== 'tighten' || step.set === undefined) continue;
    const key = `${step.rod ?? 0} ${step.set}`;
    const count = (used.get(key) ?? 0) + (plan.programmes[step.programme]?.cycles.length ?? 0);
    used.set(key, count);
    const allowed = plan.engine.boltSets.find(({ set }) => set === step.set)?.tightenings;
    if (allowed === undefined) {
      tell(
        step.id,
        `The engine sheet doesn't say how often the "${step.set}" bolts may be tightened.`,
        'Add the set to "boltSets" of the engine sheet.',
      );
    } else if (count > allowed) {
      tell(
        step.id,
        `Here the "${step.set}" bolts are tightened ${count} times; the sheet allows ${allowed}.`,
        'Use another bolt set, or fewer cycles.',
      );
    }
  }
}

function checkCard(plan: Plan, tellSheet: TellSheet): void {
  const gauges = plan.steps.filter((step): step is StepOf<'gauge'> => step.kind === 'gauge');
  const { bands, range } = plan.engine.card;
  for (const name of new Set(gauges.map(({ limit }) => limit))) {
    const { low, high } = plan.limits[name] ?? {};
    const smallest = bands[0]?.clearance ?? '0';
    const largest = bands.at(-1)?.clearance ?? '0';
    const isCovered =
      (low === undefined || !isAbove(smallest, low)) && (high === undefined || !isAbove(high, largest));
    if (!isCovered) {
      tellSheet(
        ['card', 'bands'],
        `The card reads ${smallest} to ${largest} mm and doesn't reach the limits of "${name}".`,
        'Use a thread whose card covers both limits.',
      );
    }
    const isInRange =
      (low === undefined || !isAbove(range.low, low)) && (high === undefined || !isAbove(high, range.high));
    if (!isInRange) {
      tellSheet(
        ['card', 'range'],
        `The thread is made for ${range.low} to ${range.high} mm and doesn't reach the limits of "${name}".`,
        'Use a thread whose range covers both limits.',
      );
    }
  }
}

function checkWatches(plan: Plan, tell: TellAt): void {
  for (const step of plan.steps) {
    if (step.kind !== 'watch') continue;
    const late = step.checks.find(({ atSeconds }) =>
      isAbove(String(atSeconds), String(Number(step.minutes) * 60)),
    );
    if (late) {
      tell(
        step.id,
        `The check "${late.id}" is due after the ${step.minutes} minutes of the watch.`,
        'Let it be due earlier, or watch longer.',
      );
    }
  }
}
