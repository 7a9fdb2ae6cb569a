/** A crankpin, its angle from crankpin 1 (degrees, running direction), and the rods on it with their banks. */
export interface Crankpin {
  pin: number;
  angle: number;
  rods: { rod: number; bankAxis: number }[];
}

/** What crank geometry needs to know of an engine. Angles in degrees, positive in the running direction. */
export interface Engine {
  crankpins: Crankpin[];
}

/** A crank angle to stop at (degrees, 0 ≤ angle < 360) and the rods to work on there. */
export interface TurningStop {
  angle: number;
  rods: number[];
}

/*
 * Angles are worked with as whole millionths of a degree, so that a window's edge is met or missed for certain
 * and never by a rounding error, which would cost a whole turn.
 */
const PER_DEGREE = 1_000_000;
const FULL_TURN = 360 * PER_DEGREE;

/** A rod's window of crank positions, counted as the turn from the start to the window's beginning. */
interface Window {
  rod: number;
  opensAfter: number;
}

/** The angle of each rod's crankpin from crankpin 1 (the lowest number), degrees in the running direction. */
export function pinAngles(engine: Engine): Map<number, number> {
  const pins = requirePins(engine);
  const first = pins.reduce((lowest, pin) => (pin.pin < lowest.pin ? pin : lowest));
  const entries = pins.flatMap((pin) =>
    pin.rods.map(({ rod }): [number, number] => [rod, degrees(turn(pin.angle - first.angle))]),
  );
  return new Map(entries.toSorted(([a], [b]) => a - b));
}

/**
 * The stops at which every rod comes within `reach` (degrees, 0 to 180) of its bottom dead centre, turning from
 * `start` in the running direction only. The total turn is the least there is, and with it the stops the fewest;
 * the start is a stop if it serves a rod. A rod is worked on at the first stop that reaches it. A rod is at the
 * bottom when crank angle + pin angle = bank axis + 180.
 */
export function turningPlan(
  engine: Engine,
  { reach, start }: { reach: number; start: number },
): TurningStop[] {
  if (!(reach >= 0 && reach <= 180)) throw new RangeError('The reach must be 0 to 180 degrees.');
  if (!Number.isFinite(start)) throw new RangeError('The start must be an angle in degrees.');
  const width = Math.min(Math.round(2 * reach * PER_DEGREE), FULL_TURN);
  const windows = rodWindows(requirePins(engine), reach, start);
  const isOpen = (window: Window, after: number): boolean => positive(after - window.opensAfter) <= width;
  const notAtStart = windows.filter((window) => !isOpen(window, 0));
  const total = Math.max(0, ...notAtStart.map((window) => window.opensAfter));
  const between = notAtStart.filter((window) => !isOpen(window, total));
  const stops = [
    ...(notAtStart.length < windows.length ? [0] : []),
    ...fewestStops(between, width),
    ...(notAtStart.length > 0 ? [total] : []),
  ];
  const waiting = new Set(windows);
  return stops.map((after) => {
    const here = [...waiting].filter((window) => isOpen(window, after));
    here.forEach((window) => waiting.delete(window));
    return {
      angle: degrees(positive(turn(start) + after)),
      rods: here.map(({ rod }) => rod).toSorted((a, b) => a - b),
    };
  });
}

function rodWindows(pins: Crankpin[], reach: number, start: number): Window[] {
  return pins.flatMap((pin) =>
    pin.rods.map(({ rod, bankAxis }) => ({
      rod,
      opensAfter: positive(turn(bankAxis + 180 - pin.angle) - Math.round(reach * PER_DEGREE) - turn(start)),
    })),
  );
}

/** The fewest positions that meet windows which neither hold the start nor wrap past it, each amid its windows. */
function fewestStops(windows: Window[], width: number): number[] {
  const groups: { first: number; last: number }[] = [];
  for (const { opensAfter } of windows.toSorted((a, b) => a.opensAfter - b.opensAfter)) {
    const group = groups.at(-1);
    if (group !== undefined && opensAfter <= group.first + width) group.last = opensAfter;
    else groups.push({ first: opensAfter, last: opensAfter });
  }
  return groups.map(({ first, last }) => Math.round((last + first + width) / 2));
}

function requirePins({ crankpins }: Engine): Crankpin[] {
  const rods = crankpins.flatMap((pin) => pin.rods);
  if (rods.length === 0) throw new RangeError('An engine needs at least one rod on a crankpin.');
  for (const angle of [...crankpins.map((pin) => pin.angle), ...rods.map((rod) => rod.bankAxis)]) {
    if (!Number.isFinite(angle))
      throw new RangeError('Every crankpin angle and bank axis must be a number of degrees.');
  }
  requireOnce(
    crankpins.map((pin) => pin.pin),
    'Crankpin',
  );
  requireOnce(
    rods.map((rod) => rod.rod),
    'Rod',
  );
  return crankpins;
}

function requireOnce(numbers: number[], name: string): void {
  const twice = numbers.find(
    (number, index) => !Number.isInteger(number) || numbers.indexOf(number) !== index,
  );
  if (twice !== undefined) throw new RangeError(`${name} ${twice} must be a whole number, named once.`);
}

function turn(angle: number): number {
  return positive(Math.round((angle % 360) * PER_DEGREE));
}

function positive(parts: number): number {
  return ((parts % FULL_TURN) + FULL_TURN) % FULL_TURN;
}

function degrees(parts: number): number {
  return parts / PER_DEGREE;
}
