/*
 * Whether an engine sheet makes sense by itself: limits that leave room, programmes that tighten, a card
 * that reads one way, a crank that has every cylinder once.
 */
import { addExact, compareExact, exactOf, subtractExact } from './decimal';
import type { EngineSheet } from './document';
import type { NodePath } from './document-source';

/** Tells of something wrong at a place in the document. */
export type Tell = (path: NodePath, message: string, mend: string) => void;

type Limit = EngineSheet['limits'][string];
type Programme = EngineSheet['programmes'][string];

/** Checks an engine sheet by itself; `warn` is for what may be meant so. */
export function checkEngine(engine: EngineSheet, tell: Tell, warn: Tell): void {
  checkCrank(engine, tell, warn);
  checkCard(engine.card, tell);
  for (const [name, limit] of Object.entries(engine.limits)) checkLimit(name, limit, tell);
  for (const [name, programme] of Object.entries(engine.programmes)) checkProgramme(name, programme, tell);
  for (const name of Object.keys(engine.fluids)) {
    const quantity = engine.fluids[name]?.quantity;
    if (quantity !== undefined && !isAbove(quantity, '0')) {
      tell(
        ['fluids', name, 'quantity'],
        `The quantity of "${name}" must be more than nothing.`,
        'Write the quantity that goes in.',
      );
    }
  }
  checkNamesOnce(engine, tell);
  if (!engine.boltSets.some(({ set }) => set === engine.measuringBolts)) {
    tell(
      ['measuringBolts'],
      `The measuring fit uses the "${engine.measuringBolts}" bolts, but "boltSets" doesn't say how often they may be tightened.`,
      `Add the set "${engine.measuringBolts}" with its tightenings to "boltSets".`,
    );
  }
  if (!engine.shells.grades.some(({ grade }) => grade === engine.shells.standard)) {
    tell(
      ['shells', 'standard'],
      `The standard grade "${engine.shells.standard}" is not among the grades.`,
      'Name one of the grades below it.',
    );
  }
}

function checkNamesOnce(engine: EngineSheet, tell: Tell): void {
  const lists: [NodePath, string, string[]][] = [
    [['capBolts'], 'bolt', engine.capBolts.map(({ bolt }) => bolt)],
    [['boltSets'], 'set', engine.boltSets.map(({ set }) => set)],
    [['shells', 'grades'], 'grade', engine.shells.grades.map(({ grade }) => grade)],
    [['crankpins'], 'pin', engine.crankpins.map(({ pin }) => String(pin))],
  ];
  for (const [path, what, names] of lists) {
    names.forEach((name, index) => {
      if (names.indexOf(name) === index) return;
      tell([...path, index, what], `The ${what} "${name}" is there twice.`, 'Keep it once.');
    });
  }
}

function checkCrank(engine: EngineSheet, tell: Tell, warn: Tell): void {
  const { cylinders, crankpins, firingOrder } = engine;
  const seen = new Set<number>();
  let isWhole = true;
  crankpins.forEach(({ rods }, pin) =>
    rods.forEach(({ rod }, index) => {
      if (rod <= cylinders && !seen.has(rod)) {
        seen.add(rod);
        return;
      }
      isWhole = false;
      const why = seen.has(rod) ? 'is on a crankpin already' : `is more than the ${cylinders} cylinders`;
      tell(
        ['crankpins', pin, 'rods', index, 'rod'],
        `Rod ${rod} ${why}.`,
        'Give each cylinder one rod on one crankpin.',
      );
    }),
  );
  const missing = numbers(cylinders).filter((rod) => !seen.has(rod));
  if (missing.length > 0) {
    isWhole = false;
    tell(
      ['crankpins'],
      `No crankpin carries rod ${missing.join(', ')}.`,
      'Add each missing rod to its crankpin.',
    );
  }
  const isPermutation =
    firingOrder.length === cylinders &&
    numbers(cylinders).every((cylinder) => firingOrder.includes(cylinder));
  if (!isPermutation) {
    tell(
      ['firingOrder'],
      `The firing order doesn't name each of the ${cylinders} cylinders once.`,
      'Write each cylinder once.',
    );
  } else if (isWhole && !agreesWithCrank(engine)) {
    warn(
      ['firingOrder'],
      'The firing order takes more than two turns of this crank.',
      'Compare firing order, pin angles and bank axes with the data sheet; angles count in the running direction.',
    );
  }
}

/** In a four-stroke engine every cylinder comes to its top once, in firing order, within two turns. */
function agreesWithCrank({ firingOrder, crankpins }: EngineSheet): boolean {
  const tops = new Map(
    crankpins.flatMap(({ angle, rods }) =>
      rods.map(({ rod, bankAxis }): [number, number] => [rod, bankAxis - angle]),
    ),
  );
  const turns = firingOrder.map((cylinder, index) => {
    const next = firingOrder[(index + 1) % firingOrder.length] ?? cylinder;
    const between = ((((tops.get(next) ?? 0) - (tops.get(cylinder) ?? 0)) % 360) + 360) % 360;
    return between === 0 ? 360 : between;
  });
  return turns.reduce((sum, turn) => sum + turn, 0) <= 720;
}

function checkCard(card: EngineSheet['card'], tell: Tell): void {
  if (!isAbove(card.threadDiameter, '0')) {
    tell(['card', 'threadDiameter'], 'The thread must be thicker than nothing.', 'Write its diameter in mm.');
  }
  if (!isAbove(card.range.high, card.range.low)) {
    tell(
      ['card', 'range'],
      'The range of the thread ends below its beginning.',
      'Write the smaller clearance as "low".',
    );
  }
  card.bands.slice(1).forEach((band, index) => {
    const before = card.bands[index];
    if (!before || (isAbove(before.width, band.width) && isAbove(band.clearance, before.clearance))) return;
    tell(
      ['card', 'bands', index + 1],
      `The band ${band.width} mm for ${band.clearance} mm is out of order: a wider thread is a smaller clearance.`,
      'List the bands from the widest to the narrowest, clearances rising.',
    );
  });
}

function checkLimit(name: string, limit: Limit, tell: Tell): void {
  const at = (field: string): NodePath => ['limits', name, field];
  const { low, high, target, uncertainty } = limit;
  if (low === undefined && high === undefined) {
    if (limit.missing === undefined) {
      tell(
        ['limits', name],
        `The limit "${name}" has no figure and doesn't say why.`,
        'Add "low" and "high", or say in "missing" why there is none.',
      );
    }
    return;
  }
  if (limit.source === undefined) {
    tell(
      ['limits', name],
      `The limit "${name}" has no source.`,
      'Add "source" with document, page, day and who checked it.',
    );
  }
  if (low !== undefined && high !== undefined && !isAbove(high, low)) {
    tell(
      at('low'),
      `The limit "${name}" has its low end ${low} at or above its high end ${high}.`,
      'Swap or correct the two figures.',
    );
    return;
  }
  const isTargetInside =
    target === undefined ||
    ((low === undefined || isAbove(target, low)) && (high === undefined || isAbove(high, target)));
  if (!isTargetInside) {
    tell(
      at('target'),
      `The target ${target} of "${name}" is not between its limits.`,
      'Write a target between low and high.',
    );
  }
  for (const field of ['taper', 'spread', 'uncertainty'] as const) {
    const value = limit[field];
    if (value !== undefined && !isAbove(value, '0')) {
      tell(
        at(field),
        `The ${field} of "${name}" must be more than nothing.`,
        'Write a figure above zero, or take it out.',
      );
    }
  }
  if (
    low !== undefined &&
    high !== undefined &&
    uncertainty !== undefined &&
    !isBelowHalf(uncertainty, low, high)
  ) {
    tell(
      at('uncertainty'),
      `The uncertainty ${uncertainty} of "${name}" leaves no reading that is surely inside ${low} to ${high}.`,
      'Name a finer way of measuring: the uncertainty must be less than half the band.',
    );
  }
}

function checkProgramme(name: string, { cycles }: Programme, tell: Tell): void {
  cycles.forEach((stages, cycle) => {
    const at = (stage: number, field?: string): NodePath =>
      field === undefined
        ? ['programmes', name, 'cycles', cycle, stage]
        : ['programmes', name, 'cycles', cycle, stage, field];
    const isLast = cycle === cycles.length - 1;
    const end = stages.length - 1;
    const release = stages.findIndex(({ kind }) => kind === 'release');
    if (isLast && release !== -1) {
      tell(
        at(release),
        `The last cycle of "${name}" is released: nothing would hold.`,
        'Take the release out of the last cycle.',
      );
    } else if (!isLast && release !== end) {
      tell(
        at(Math.max(0, end)),
        `Cycle ${cycle + 1} of "${name}" doesn't end with its one release.`,
        'End every cycle but the last with a release.',
      );
    }
    if (!stages.some(({ kind }) => kind === 'torque' || kind === 'angle')) {
      tell(at(0), `Cycle ${cycle + 1} of "${name}" tightens nothing.`, 'Add a torque or an angle to it.');
    }
    let torque = '0';
    stages.forEach((stage, index) => {
      if (stage.kind !== 'torque' && stage.kind !== 'angle') return;
      if (!isAbove(stage.target, '0')) {
        tell(
          at(index, 'target'),
          `A target of "${name}" is not above zero.`,
          'Write the figure of the data sheet.',
        );
      } else if (stage.kind === 'torque' && !isAbove(stage.target, torque)) {
        tell(
          at(index, 'target'),
          `The torque falls from ${torque} to ${stage.target} within a cycle of "${name}".`,
          'Put the passes in rising order.',
        );
      }
      if (!isAbove(stage.tolerance, '0') || !isAbove(stage.target, stage.tolerance)) {
        tell(
          at(index, 'tolerance'),
          `The tolerance ${stage.tolerance} of "${name}" makes no sense for ${stage.target}.`,
          'Write a tolerance above zero and below the target.',
        );
      }
      if (stage.kind === 'torque') torque = stage.target;
    });
  });
}

function numbers(count: number): number[] {
  return Array.from({ length: count }, (_, index) => index + 1);
}

/** Compared as decimals, never as floating point. */
export function isAbove(one: string, other: string): boolean {
  return compareExact(exactOf(one), exactOf(other)) > 0;
}

function isBelowHalf(part: string, low: string, high: string): boolean {
  const twice = addExact(exactOf(part), exactOf(part));
  return compareExact(subtractExact(exactOf(high), exactOf(low)), twice) > 0;
}
