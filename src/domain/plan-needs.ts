/*
 * What each step needs before it. The invariants: every need points backwards in the plan; a phase needs
 * the whole phase before it; nothing after a hold point can be done before the hold point; nobody waits
 * for a witness point; a list names only what the other names in it don't already imply.
 */
import type { Procedure, ProcedureSection } from './document';
import type { PlacedStep } from './plan-expand';

type Needs = Map<string, string[]>;

/** The needs of every step that is in the plan, by id. */
export function linkSteps(placed: PlacedStep[], coversOf: (id: string) => string[]): Needs {
  const raw: Needs = new Map();
  for (const section of bySection(placed)) linkSection(section, raw);
  linkSections(placed, raw);
  const kept = placed.filter(({ dropped, section }) => !dropped && section.onDemand !== true);
  const needs = bridge(placed, kept, raw);
  addPhaseBarriers(kept, needs);
  addHoldPoints(kept, needs, coversOf);
  return shorten(placed, needs);
}

/** The placed steps that a reference in `needs` or `covers` means, seen from a step's place. */
export function resolveReference(
  reference: string,
  placed: PlacedStep[],
  from: Pick<PlacedStep, 'procedure'> & Partial<PlacedStep>,
): PlacedStep[] {
  const [head = '', tail] = reference.split('.');
  const within = (procedureId: string, name: string) => {
    const steps = placed.filter(({ procedure, step }) => procedure.id === procedureId && step.id === name);
    if (steps.length > 0) return sameRod(steps, from);
    return placed.filter(({ procedure, section }) => procedure.id === procedureId && section.id === name);
  };
  if (tail !== undefined) return within(head, tail);
  const local = within(from.procedure.id, head);
  return local.length > 0 ? local : placed.filter(({ procedure }) => procedure.id === head);
}

/** Of the instances of one step, those that share rod, half or turning stop with the place. */
function sameRod(instances: PlacedStep[], from: Partial<PlacedStep>): PlacedStep[] {
  return instances.filter(
    ({ rod, half, stop }) =>
      (rod === undefined || from.rod === undefined || rod === from.rod) &&
      (half === undefined || from.half === undefined || half === from.half) &&
      (rod !== undefined || stop === undefined || from.stop === undefined || stop === from.stop),
  );
}

interface SectionSteps {
  procedure: Procedure;
  section: ProcedureSection;
  steps: PlacedStep[];
}

function bySection(placed: PlacedStep[]): SectionSteps[] {
  return groupBy(placed, ({ section }) => section).flatMap((steps) => {
    const [first] = steps;
    return first ? [{ procedure: first.procedure, section: first.section, steps }] : [];
  });
}

/** The section's own order: a chain of steps, or at each stop the turn and then a chain a rod. */
function linkSection({ section, steps }: SectionSteps, raw: Needs): void {
  if (section.loop !== 'rods') {
    linkChain(groups(steps), section.order === 'listed', [], raw);
    return;
  }
  let before: string[] = [];
  const stops = [...new Set(steps.map(({ stop }) => stop))];
  for (const stop of stops) {
    const here = steps.filter((one) => one.stop === stop);
    const turns = here.filter(({ step }) => step.kind === 'turn');
    linkChain(groups(turns), true, before, raw);
    const turned = turns.length > 0 ? ends(turns, raw) : before;
    const rods = [...new Set(here.flatMap(({ rod }) => (rod === undefined ? [] : [rod])))];
    for (const rod of rods) {
      const chain = here.filter((one) => one.rod === rod);
      linkChain(groups(chain), section.order === 'listed', turned, raw);
    }
    // Without a turn between them the rods of all stops wait for nothing but the section's start.
    if (turns.length > 0) before = ends(here, raw);
  }
}

function linkChain(steps: PlacedStep[][], inOrder: boolean, first: string[], raw: Needs): void {
  let previous: PlacedStep[] = [];
  for (const group of steps) {
    for (const one of group) {
      raw.set(one.id, inOrder && previous.length > 0 ? sameRod(previous, one).map(({ id }) => id) : first);
    }
    previous = group;
  }
}

/** Instances of the same step stand side by side: none of them waits for another. */
function groups(steps: PlacedStep[]): PlacedStep[][] {
  return groupBy(steps, ({ step }) => step.id);
}

/** Groups in order of first appearance. */
function groupBy(steps: PlacedStep[], keyOf: (placed: PlacedStep) => unknown): PlacedStep[][] {
  const found = new Map<unknown, PlacedStep[]>();
  for (const one of steps) {
    const key = keyOf(one);
    found.set(key, [...(found.get(key) ?? []), one]);
  }
  return [...found.values()];
}

/** The steps that no other step of the list needs: when they are done, all are. */
function ends(steps: PlacedStep[], needs: Needs): string[] {
  const needed = new Set(steps.flatMap(({ id }) => needs.get(id) ?? []));
  return steps.filter(({ id }) => !needed.has(id)).map(({ id }) => id);
}

/** Explicit needs, and the section before for whatever has nothing before it in its own section. */
function linkSections(placed: PlacedStep[], raw: Needs): void {
  let before: SectionSteps | undefined;
  for (const current of bySection(placed)) {
    if (current.section.onDemand) continue;
    const sameProcedure = before?.procedure === current.procedure ? before : undefined;
    const entries = current.steps.filter(({ id }) => (raw.get(id) ?? []).length === 0);
    const sectionNeeds = current.section.needs
      ? explicit(current.section.needs, placed, { procedure: current.procedure })
      : ends(sameProcedure?.steps ?? [], raw);
    for (const { id } of entries) raw.set(id, sectionNeeds);
    for (const one of current.steps) {
      if (!one.step.needs) continue;
      const asked = explicit(one.step.needs, placed, one);
      // A turn waits for the rods of the stop before it, whatever else it needs.
      const own = one.step.kind === 'turn' && one.stop !== undefined ? (raw.get(one.id) ?? []) : [];
      raw.set(one.id, [...asked, ...own]);
    }
    before = current;
  }
}

function explicit(
  references: string[],
  placed: PlacedStep[],
  from: Pick<PlacedStep, 'procedure'> & Partial<PlacedStep>,
): string[] {
  return references.flatMap((reference) => {
    const found = resolveReference(reference, placed, from);
    if (found.length === 0)
      throw new RangeError(`"${from.procedure.id}" needs "${reference}", which isn't there.`);
    return found.map(({ id }) => id);
  });
}

/** Links over steps that the options dropped and over witness points, which nobody waits for. */
function bridge(placed: PlacedStep[], kept: PlacedStep[], raw: Needs): Needs {
  const position = positions(placed);
  const solid = new Set(kept.filter(({ step }) => step.kind !== 'witness').map(({ id }) => id));
  const across = new Map<string, string[]>();
  const standIns = (id: string): string[] => {
    if (solid.has(id)) return [id];
    const known = across.get(id);
    if (known) return known;
    across.set(id, []);
    const found = (raw.get(id) ?? []).flatMap(standIns);
    across.set(id, found);
    return found;
  };
  const needs: Needs = new Map();
  for (const { id } of kept) {
    const found = [...new Set((raw.get(id) ?? []).flatMap(standIns))];
    const later = found.find((need) => (position.get(need) ?? 0) >= (position.get(id) ?? 0));
    if (later !== undefined) throw new RangeError(`"${id}" needs "${later}", which comes later.`);
    needs.set(id, found);
  }
  return needs;
}

function addPhaseBarriers(kept: PlacedStep[], needs: Needs): void {
  let barrier: string[] = [];
  for (const phase of groupBy(kept, ({ procedure }) => procedure.id)) {
    const own = new Set(phase.map(({ id }) => id));
    for (const { id } of phase) {
      const current = needs.get(id) ?? [];
      if (!current.some((need) => own.has(need))) needs.set(id, [...current, ...barrier]);
    }
    const solid = phase.filter(({ step }) => step.kind !== 'witness');
    if (solid.length > 0) barrier = ends(solid, needs);
  }
}

/** A hold point waits for what it covers, and everything after it waits for the hold point. */
function addHoldPoints(kept: PlacedStep[], needs: Needs, coversOf: (id: string) => string[]): void {
  let hold: string | undefined;
  for (const { id, step } of kept) {
    const current = needs.get(id) ?? [];
    const covers = step.kind === 'hold' ? coversOf(id) : [];
    needs.set(id, [...current, ...covers, ...(hold === undefined ? [] : [hold])]);
    if (step.kind === 'hold') hold = id;
  }
}

/** Drops from each list what the rest of it implies, and sorts it in the order of the plan. */
function shorten(placed: PlacedStep[], needs: Needs): Needs {
  const position = positions(placed);
  const behind = new Map<string, Set<string>>();
  const short: Needs = new Map();
  for (const { id } of placed) {
    const wanted = [...new Set(needs.get(id) ?? [])];
    const implied = new Set<string>();
    for (const need of wanted) behind.get(need)?.forEach((far) => implied.add(far));
    const all = new Set(implied);
    for (const need of wanted) all.add(need);
    behind.set(id, all);
    const kept = wanted.filter((need) => !implied.has(need));
    kept.sort((a, b) => (position.get(a) ?? 0) - (position.get(b) ?? 0));
    short.set(id, kept);
  }
  return short;
}

function positions(placed: PlacedStep[]): Map<string, number> {
  return new Map(placed.map(({ id }, index) => [id, index]));
}
