/*
 * The open list in advance: which step opens each thing and which closes it. Whatever has no partner
 * would stay open for ever and bar the handover, so a plan with a loose end is never made.
 */
import type { Gate, PlanItem, PlanStep, StepOf } from './plan';

/** A step that opens or closes something and has no partner. */
export interface LooseEnd {
  step: string;
  item: string;
  why:
    | 'never refitted'
    | 'never taken out'
    | 'never counted in'
    | 'refitted but not taken off'
    | 'counted in but not out'
    | 'opened twice';
}

const neverClosed = {
  removed: 'never refitted',
  placed: 'never taken out',
  counted: 'never counted in',
} as const satisfies Record<PlanItem['how'], LooseEnd['why']>;

type Opening = Omit<PlanItem, 'closes'>;

/** Pairs what is taken off, put in or counted out with what closes it, along the plan. */
export function pairItems(
  steps: PlanStep[],
  barsOf: (stepId: string) => Gate[] | undefined,
): { items: PlanItem[]; looseEnds: LooseEnd[] } {
  const items: PlanItem[] = [];
  const looseEnds: LooseEnd[] = [];
  const open = new Map<string, Opening>();

  const start = (opening: Opening) => {
    if (open.has(opening.id)) looseEnds.push({ step: opening.opens, item: opening.id, why: 'opened twice' });
    else open.set(opening.id, opening);
  };
  const end = (id: string, closes: string, how: PlanItem['how'], why: LooseEnd['why']) => {
    const opening = open.get(id);
    if (opening?.how !== how) {
      looseEnds.push({ step: closes, item: id, why });
      return;
    }
    open.delete(id);
    items.push({ ...opening, closes });
  };

  for (const step of steps) {
    const closes = open.get(itemOf(step) ?? '');
    if (step.kind === 'remove' && closes?.how === 'placed')
      end(step.item, step.id, 'placed', 'never taken out');
    else if (step.kind === 'remove' || step.kind === 'place') start(opened(step, barsOf(step.id)));
    else if (step.kind === 'refit') end(step.item, step.id, 'removed', 'refitted but not taken off');
    else if (step.kind === 'count' && step.side === 'out') start(counted(step, barsOf(step.id)));
    else if (step.kind === 'count') end(step.tally, step.id, 'counted', 'counted in but not out');
  }
  for (const { how, opens, id } of open.values()) {
    looseEnds.push({ step: opens, item: id, why: neverClosed[how] });
  }
  const order = new Map(steps.map((step, index) => [step.id, index]));
  items.sort((a, b) => (order.get(a.opens) ?? 0) - (order.get(b.opens) ?? 0));
  return { items, looseEnds };
}

function itemOf(step: PlanStep): string | undefined {
  return step.kind === 'remove' ? step.item : undefined;
}

function opened(step: StepOf<'remove'> | StepOf<'place'>, bars: Gate[] | undefined): Opening {
  const how = step.kind === 'place' ? 'placed' : 'removed';
  return {
    id: step.item,
    name: inWords(step.item),
    how,
    opens: step.id,
    bars: bars ?? ['start', 'handover'],
  };
}

function counted(step: StepOf<'count'>, bars: Gate[] | undefined): Opening {
  return { id: step.tally, name: step.what, how: 'counted', opens: step.id, bars: bars ?? ['close'] };
}

/** `drive-shaft@rod3` reads "drive shaft, rod 3". */
function inWords(item: string): string {
  const [thing = '', place] = item.split('@');
  const words = thing.replaceAll('-', ' ');
  return place === undefined ? words : `${words}, ${place.replace(/^rod/, 'rod ')}`;
}
