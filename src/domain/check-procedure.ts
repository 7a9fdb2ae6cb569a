/*
 * Whether a procedure holds together by itself, whatever engine and route it is used with: ids once,
 * kinds where they belong, references to its own steps.
 */
import type { Procedure, ProcedureSection, ProcedureStep } from './document';
import type { NodePath } from './document-source';
import type { Tell } from './check-engine';
import { namesIn } from './plan-text';

interface Place {
  section: ProcedureSection;
  step: ProcedureStep;
  path: NodePath;
}

/** Checks a procedure by itself. */
export function checkProcedure(procedure: Procedure, tell: Tell): void {
  checkIds(procedure, tell);
  for (const place of placesOf(procedure)) {
    checkKind(place, tell);
    checkRodWords(place, tell);
    checkChecks(place, tell);
  }
}

/** Every step of a procedure with where it stands in the file. */
export function placesOf(procedure: Procedure): Place[] {
  return procedure.sections.flatMap((section, s) =>
    section.steps.map((step, t) => ({ section, step, path: ['sections', s, 'steps', t] })),
  );
}

/** Whether the step stands at one rod. */
function isAtRod({ section, step }: Place): boolean {
  return step.each === 'rod' || step.each === 'shell' || (section.loop === 'rods' && step.kind !== 'turn');
}

function checkIds(procedure: Procedure, tell: Tell): void {
  const seen = new Set<string>();
  const once = (id: string, path: NodePath, what: string) => {
    if (seen.has(id)) {
      tell(
        [...path, 'id'],
        `The id "${id}" is used twice in this procedure.`,
        `Give this ${what} an id of its own.`,
      );
    }
    seen.add(id);
  };
  procedure.sections.forEach((section, index) => once(section.id, ['sections', index], 'section'));
  for (const { step, path } of placesOf(procedure)) once(step.id, path, 'step');
}

function checkKind(place: Place, tell: Tell): void {
  const { section, step, path } = place;
  if (step.sets && !isAtRod(place)) {
    tell(
      [...path, 'sets'],
      `"${step.id}" changes a rod but stands at none.`,
      'Put it in a section with "loop: rods", or add "each: rod".',
    );
  }
  if (step.each === 'grade' && (step.kind !== 'fit' || section.loop !== undefined)) {
    tell(
      [...path, 'each'],
      `"${step.id}" can't be repeated for each grade.`,
      'Use "each: grade" only on a "fit" step outside a loop.',
    );
  }
  if (
    step.kind === 'turn' &&
    section.loop === 'rods' &&
    (step.fullTurns !== undefined || step.each !== undefined)
  ) {
    tell(
      path,
      `The turn "${step.id}" goes to the stops of a loop.`,
      'Take "fullTurns" and "each" out, or move it out of the loop.',
    );
  }
  if (step.kind === 'turn' && section.loop === undefined && step.fullTurns === undefined) {
    tell(
      path,
      `The turn "${step.id}" doesn't say how far.`,
      'Add "fullTurns", or put it in a section with "loop: rods".',
    );
  }
  if (step.kind === 'gauge') checkGauge(place, tell);
  if (step.kind === 'choose-shells' && !isAtRod(place)) {
    tell(path, `"${step.id}" chooses shells but stands at no rod.`, 'Put it in a section with "loop: rods".');
  }
  if (step.kind === 'grade-shells' && isAtRod(place)) {
    tell(
      path,
      `"${step.id}" grades all shells side by side but stands at one rod.`,
      'Put it in a section without a loop, and take "each" out.',
    );
  }
  if (step.kind === 'tighten') checkTighten(place, step, tell);
  if (section.onDemand !== true && (step.kind === 'make-safe' || step.kind === 'resume')) {
    tell(
      path,
      `"${step.id}" would stand in the way of every job.`,
      'Move it to a section with "onDemand: true".',
    );
  }
}

function checkTighten(place: Place, step: Extract<ProcedureStep, { kind: 'tighten' }>, tell: Tell): void {
  const { path } = place;
  if (step.fit === 'joint' && step.bolts === undefined) {
    tell(path, `"${step.id}" tightens a joint but names no bolts.`, 'Add "bolts" with their names.');
  }
  if (step.fit !== 'joint' && step.bolts !== undefined) {
    tell(
      [...path, 'bolts'],
      `"${step.id}" tightens a rod cap, whose bolts the engine sheet names.`,
      'Take "bolts" out.',
    );
  }
  if (step.fit !== 'joint' && !isAtRod(place)) {
    tell(
      path,
      `"${step.id}" tightens a rod cap but stands at no rod.`,
      'Put it in a section with "loop: rods".',
    );
  }
}

/** A reading sends the work back to steps of its own rod that come before it. */
function checkGauge(place: Place, tell: Tell): void {
  const { section, step, path } = place;
  if (step.kind !== 'gauge') return;
  if (!isAtRod(place)) {
    tell(path, `"${step.id}" gauges but stands at no rod.`, 'Put it in a section with "loop: rods".');
    return;
  }
  for (const field of ['reworkFrom', 'measureAgainFrom'] as const) {
    const target = section.steps.findIndex(({ id }) => id === step[field]);
    if (target !== -1 && target < section.steps.indexOf(step)) continue;
    tell(
      [...path, field],
      `"${step[field]}" is no step of this section that comes before "${step.id}".`,
      'Name a step of the same section, before this one.',
    );
  }
}

function checkRodWords(place: Place, tell: Tell): void {
  const { step, section, path } = place;
  const known: Record<string, boolean> = {
    rod: isAtRod(place),
    half: step.each === 'shell',
    grade: step.each === 'grade',
    angle: section.loop === 'rods',
    rods: section.loop === 'rods',
    minutes: step.kind === 'watch',
    distance: step.kind === 'drive',
    count: step.kind === 'hold' || step.kind === 'witness',
  };
  for (const { text, at } of textsOf(step)) {
    for (const name of namesIn(text)) {
      if (known[name] !== false) continue;
      tell(
        [...path, ...at],
        `{${name}} has no meaning in "${step.id}".`,
        'Take it out, or move the step to where it has one.',
      );
    }
  }
}

function checkChecks({ step, path }: Place, tell: Tell): void {
  const lists = Object.entries({
    checks: 'checks' in step ? step.checks : [],
    before: step.kind === 'drive' ? step.before : [],
    after: step.kind === 'drive' ? step.after : [],
  });
  const seen = new Set<string>();
  for (const [field, list] of lists) {
    list.forEach((check, index) => {
      if (seen.has(check.id)) {
        tell(
          [...path, field, index, 'id'],
          `The check "${check.id}" is there twice in "${step.id}".`,
          'Give each check an id of its own.',
        );
      }
      seen.add(check.id);
      if ('atSeconds' in check && (check.ask === undefined) === (check.limit === undefined)) {
        tell(
          [...path, field, index],
          `The check "${check.id}" must either ask or read a limit.`,
          'Give it "ask" or "limit", and only one of them.',
        );
      }
    });
  }
}

/** The texts of a step in which names in braces are filled in, and where they stand. */
export function textsOf(step: ProcedureStep): { text: string; at: NodePath }[] {
  const lists: Record<string, { ask?: string | undefined }[]> = {
    checks: 'checks' in step ? step.checks : [],
    before: step.kind === 'drive' ? step.before : [],
    after: step.kind === 'drive' ? step.after : [],
  };
  return [
    { text: step.title, at: ['title'] },
    { text: step.why ?? '', at: ['why'] },
    ...(step.how ?? []).map((text, index) => ({ text, at: ['how', index] })),
    ...(step.cautions ?? []).map(({ text }, index) => ({ text, at: ['cautions', index, 'text'] })),
    ...('meaning' in step ? [{ text: step.meaning, at: ['meaning'] }] : []),
    ...(step.kind === 'fit' ? [{ text: step.part, at: ['part'] }] : []),
    ...(step.kind === 'photograph' ? [{ text: step.subject, at: ['subject'] }] : []),
    ...Object.entries(lists).flatMap(([field, list]) =>
      list.map(({ ask }, index) => ({ text: ask ?? '', at: [field, index, 'ask'] })),
    ),
  ];
}
