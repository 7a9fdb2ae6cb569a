/*
 * Whether everything that the procedures of one route refer to is there: on the engine sheet, on the
 * route, or earlier in the procedures.
 */
import type { EngineSheet, Procedure, ProcedureSection, Route } from './document';
import type { NodePath } from './document-source';
import { placesOf, textsOf } from './check-procedure';
import { isKnownName, namesIn } from './plan-text';

/** Tells of something wrong at a place in one of the route's procedures. */
export type TellOf = (procedure: Procedure, path: NodePath, message: string, mend: string) => void;

interface RouteParts {
  route: Route;
  procedures: Procedure[];
  engine: EngineSheet;
}

/** Checks every reference of the route's procedures. */
export function checkReferences(parts: RouteParts, tell: TellOf): void {
  const order = indexOf(parts.procedures);
  for (const procedure of parts.procedures) {
    procedure.sections.forEach((section, index) => {
      const path = ['sections', index];
      checkWhen(parts.route, procedure, section.when, path, tell);
      const place = { procedure, at: order.get(`${procedure.id}.${section.id}`)?.first ?? 0 };
      checkNeeds(section.needs, place, path, order, tell);
    });
    for (const { step, path } of placesOf(procedure)) {
      const place = { procedure, at: order.get(`${procedure.id}.${step.id}`)?.first ?? 0 };
      checkWhen(parts.route, procedure, step.when, path, tell);
      checkNeeds(step.needs, place, path, order, tell);
      if ('covers' in step) checkCovers(step.covers, place, path, order, tell);
      checkNames(parts, procedure, step, path, tell);
    }
  }
}

interface Span {
  first: number;
  last: number;
  onDemand: boolean;
  /** A single step, which must lie wholly before what refers to it. */
  isStep: boolean;
}

/** Where each procedure, section and step lies in the order of the route. */
function indexOf(procedures: Procedure[]): Map<string, Span> {
  const spans = new Map<string, Span>();
  let at = 0;
  for (const procedure of procedures) {
    const start = at;
    for (const section of procedure.sections) {
      const onDemand = section.onDemand === true;
      spans.set(`${procedure.id}.${section.id}`, {
        first: at,
        last: at + section.steps.length - 1,
        onDemand,
        isStep: false,
      });
      for (const step of section.steps) {
        spans.set(`${procedure.id}.${step.id}`, { first: at, last: at, onDemand, isStep: true });
        at += 1;
      }
    }
    spans.set(procedure.id, { first: start, last: at - 1, onDemand: false, isStep: false });
  }
  return spans;
}

interface Referrer {
  procedure: Procedure;
  at: number;
}

function find(reference: string, { procedure }: Referrer, order: Map<string, Span>): Span | undefined {
  return reference.includes('.')
    ? order.get(reference)
    : (order.get(`${procedure.id}.${reference}`) ?? order.get(reference));
}

function checkNeeds(
  needs: string[] | undefined,
  place: Referrer,
  path: NodePath,
  order: Map<string, Span>,
  tell: TellOf,
): void {
  needs?.forEach((reference, index) => {
    const at = [...path, 'needs', index];
    const span = find(reference, place, order);
    if (!span) {
      tell(
        place.procedure,
        at,
        `There is no step "${reference}" on this route.`,
        'Name a step of this procedure, or write "procedure.step".',
      );
    } else if (span.onDemand) {
      tell(
        place.procedure,
        at,
        `"${reference}" is done on demand; nothing can wait for it.`,
        'Name another step, or none.',
      );
    } else if (span.last >= place.at) {
      tell(
        place.procedure,
        at,
        `"${reference}" comes later or is the step itself.`,
        'Name a step that comes before this one.',
      );
    }
  });
}

function checkCovers(
  covers: string[] | undefined,
  place: Referrer,
  path: NodePath,
  order: Map<string, Span>,
  tell: TellOf,
): void {
  covers?.forEach((reference, index) => {
    const at = [...path, 'covers', index];
    const span = find(reference, place, order);
    if (!span) {
      tell(
        place.procedure,
        at,
        `There is nothing called "${reference}" on this route to cover.`,
        'Name a step, a section or a procedure.',
      );
    } else if (span.first >= place.at || (span.isStep && span.onDemand)) {
      tell(
        place.procedure,
        at,
        `"${reference}" can't be evidence here: it comes later.`,
        'Name what comes before this hold point.',
      );
    }
  });
}

function checkWhen(
  route: Route,
  procedure: Procedure,
  when: ProcedureSection['when'],
  path: NodePath,
  tell: TellOf,
): void {
  if (!when) return;
  const option = route.options.find(({ id }) => id === when.option);
  if (!option) {
    tell(
      procedure,
      [...path, 'when', 'option'],
      `The route "${route.id}" never asks for "${when.option}".`,
      'Add the option to the route, or take "when" out.',
    );
    return;
  }
  const wanted = typeof when.is === 'string' ? [when.is] : when.is;
  const unknown = wanted.find((choice) => !option.choices.some(({ id }) => id === choice));
  if (unknown !== undefined) {
    const choices = option.choices.map(({ id }) => id).join(', ');
    tell(
      procedure,
      [...path, 'when', 'is'],
      `"${unknown}" is no choice of "${when.option}".`,
      `Write one of: ${choices}.`,
    );
  }
}

function checkNames(
  { route, engine }: RouteParts,
  procedure: Procedure,
  step: ReturnType<typeof placesOf>[number]['step'],
  path: NodePath,
  tell: TellOf,
): void {
  const onSheet = (group: 'limits' | 'programmes' | 'fluids' | 'figures', name: string, at: NodePath) => {
    if (Object.hasOwn(engine[group], name)) return;
    const one = group.slice(0, -1);
    tell(
      procedure,
      [...path, ...at],
      `The engine sheet "${engine.id}" has no ${one} "${name}".`,
      `Add it to "${group}" of the sheet, or name another.`,
    );
  };
  if (step.kind === 'read' || step.kind === 'gauge') onSheet('limits', step.limit, ['limit']);
  if (step.kind === 'tighten') onSheet('programmes', step.programme, ['programme']);
  if (step.kind === 'fill') onSheet('fluids', step.fluid, ['fluid']);
  if (step.kind === 'drive') onSheet('figures', step.distance, ['distance']);
  if (step.kind === 'watch') {
    onSheet('figures', step.minutes, ['minutes']);
    step.checks.forEach(({ limit }, index) => {
      if (limit !== undefined) onSheet('limits', limit, ['checks', index, 'limit']);
    });
  }
  if (
    (step.kind === 'hold' || step.kind === 'witness') &&
    !route.holdPoints.some(({ id }) => id === step.holdPoint)
  ) {
    tell(
      procedure,
      [...path, 'holdPoint'],
      `The route "${route.id}" doesn't say who signs "${step.holdPoint}".`,
      'Add it to the "holdPoints" of the route.',
    );
  }
  for (const { text, at } of textsOf(step)) {
    for (const name of namesIn(text)) {
      if (isKnownName(name, engine)) continue;
      tell(
        procedure,
        [...path, ...at],
        `{${name}} is not known on the engine sheet "${engine.id}".`,
        'Correct the name in braces, or add it to the sheet.',
      );
    }
  }
}
