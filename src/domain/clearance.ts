import { addExact, compareExact, exactOf, exactToNumber, subtractExact, type Exact } from '@/domain/decimal';

/** One stripe of a plastic gauge card: a thread crushed to this width stands for this clearance. Both mm. */
export interface CardBand {
  width: number;
  clearance: number;
}

/** A clearance read from a card, and how far it may be off. Both mm. */
export interface CardReading {
  clearance: number;
  uncertainty: number;
}

/** A gauging thread and the clearances (mm) that it is made for, both limits included. */
export interface ThreadSize {
  name: string;
  low: number;
  high: number;
}

/** Where a measured value lies against its two limits. `place` is 0 at the low limit and 1 at the high one. */
export interface Judgement {
  verdict: 'inside' | 'unsure' | 'outside';
  place: number;
}

/**
 * Oil clearance (mm) from the diameter of a round gauging thread and the width it was crushed to (mm each):
 * π d² / (4 w), because the cross-section stays the same. The bulged edges are left out, and a thread that is
 * no wider than it was thick has not been crushed: the formula holds above that only.
 */
export function clearanceFromWidth(threadDiameter: number, crushedWidth: number): number {
  requireLength(threadDiameter, 'thread diameter');
  requireLength(crushedWidth, 'crushed width');
  return (Math.PI * threadDiameter ** 2) / (4 * crushedWidth);
}

/**
 * Oil clearance (mm) from the crushed width (mm) by the thread's own card, interpolated in a straight line
 * between two bands. The uncertainty is half the step between the bands beside the reading; on a band, half the
 * wider of the two steps beside it. A width more than half a step off either end of the card is refused.
 */
export function clearanceFromCard(card: CardBand[], crushedWidth: number): CardReading {
  requireLength(crushedWidth, 'crushed width');
  const bands = sortedBands(card);
  requireOnCard(bands, crushedWidth);
  const on = bands.findIndex((band) => band.width === crushedWidth);
  const above = bands.findIndex((band) => band.width > crushedWidth);
  const upper = Math.max(1, above === -1 ? bands.length - 1 : above);
  const clearance = on === -1 ? interpolate(bands, upper, crushedWidth) : bandAt(bands, on).clearance;
  if (clearance <= 0) throw new RangeError('The crushed width is too far off the card to be read.');
  const steps = on === -1 ? [stepBelow(bands, upper)] : [stepBelow(bands, on), stepBelow(bands, on + 1)];
  return { clearance, uncertainty: Math.max(...steps) / 2 };
}

/** The band of a card that is nearest to a crushed width (mm each); halfway between two, the wider one. */
export function nearestBand(card: CardBand[], crushedWidth: number): CardBand {
  requireLength(crushedWidth, 'crushed width');
  const bands = sortedBands(card);
  requireOnCard(bands, crushedWidth);
  // Halfway, the wider band stands for the smaller clearance: a shell that is too tight is the graver mistake.
  return bands.reduce((best, band) => (isAsNear(band.width, best.width, crushedWidth) ? band : best));
}

function isAsNear(width: number, other: number, to: number): boolean {
  const off = (from: number): Exact => sizeOf(subtractExact(exactOf(from), exactOf(to)));
  return compareExact(off(width), off(other)) <= 0;
}

function sizeOf({ units, scale }: Exact): Exact {
  return { units: units < 0n ? -units : units, scale };
}

/** The threads that can measure an expected clearance (mm), in the order given. */
export function threadsFor(clearance: number, threads: ThreadSize[]): ThreadSize[] {
  requireLength(clearance, 'expected clearance');
  for (const { name, low, high } of threads) {
    requireLength(low, `least clearance of the thread "${name}"`);
    if (!(high > low)) throw new RangeError(`The range of the thread "${name}" ends below its beginning.`);
  }
  return threads.filter(({ low, high }) => low <= clearance && clearance <= high);
}

/**
 * Oil clearance (mm) from measured parts (mm each): the housing bore with its cap tightened, less both shell
 * walls and the crankpin, all measured square to the joint. A negative result means that the parts bind.
 */
export function clearanceFromParts(parts: {
  housingBore: number;
  upperWall: number;
  lowerWall: number;
  journal: number;
}): number {
  requireLength(parts.housingBore, 'housing bore');
  requireLength(parts.upperWall, 'upper shell wall');
  requireLength(parts.lowerWall, 'lower shell wall');
  requireLength(parts.journal, 'crankpin diameter');
  const taken = [parts.upperWall, parts.lowerWall, parts.journal].map(exactOf);
  return exactToNumber(taken.reduce(subtractExact, exactOf(parts.housingBore)));
}

/**
 * Uncertainty (mm) of a clearance by parts: the root of the sum of squares of four sizes that are each good to
 * ± `each` mm, which is twice that. Common practice, no source.
 */
export function partsUncertainty(each: number): number {
  requireLength(each, 'uncertainty of one size');
  return 2 * each;
}

/**
 * Judges a value against its limits with the measurement's uncertainty U (all in one unit), by ISO 14253-1:
 * inside from low + U to high − U, outside below low − U or above high + U, and unsure between.
 */
export function judge(reading: { value: number; low: number; high: number; uncertainty: number }): Judgement {
  const { value, low, high, uncertainty } = reading;
  for (const number of [value, low, high, uncertainty]) {
    if (!Number.isFinite(number))
      throw new RangeError('A value, its limits and its uncertainty must be numbers.');
  }
  if (uncertainty < 0) throw new RangeError('An uncertainty can not be negative.');
  if (low >= high) throw new RangeError('The low limit must be below the high limit.');
  const [v, l, h, u] = [exactOf(value), exactOf(low), exactOf(high), exactOf(uncertainty)];
  const isInside = compareExact(addExact(l, u), v) <= 0 && compareExact(v, subtractExact(h, u)) <= 0;
  const isOutside = compareExact(v, subtractExact(l, u)) < 0 || compareExact(v, addExact(h, u)) > 0;
  const verdict = isInside ? 'inside' : isOutside ? 'outside' : 'unsure';
  return { verdict, place: (value - low) / (high - low) };
}

/** Taper (mm): the difference between the clearances read at the front and the rear end of one shell (mm). */
export function taper(front: number, rear: number): number {
  requireLength(front, 'front clearance');
  requireLength(rear, 'rear clearance');
  return Math.abs(exactToNumber(subtractExact(exactOf(front), exactOf(rear))));
}

/**
 * The taper (mm) between two readings of one shell, and whether it is more than the readings can tell: more than
 * both of their uncertainties together.
 */
export function taperOf(front: CardReading, rear: CardReading): { taper: number; isTold: boolean } {
  const between = taper(front.clearance, rear.clearance);
  for (const { uncertainty } of [front, rear]) {
    if (!(uncertainty >= 0)) throw new RangeError('An uncertainty can not be negative.');
  }
  const unsure = addExact(exactOf(front.uncertainty), exactOf(rear.uncertainty));
  return { taper: between, isTold: compareExact(exactOf(between), unsure) > 0 };
}

/** Spread (mm): the largest less the smallest of the clearances (mm) of all rods. */
export function spread(clearances: number[]): number {
  if (clearances.length === 0) throw new RangeError('There is no spread of nothing.');
  for (const clearance of clearances) requireLength(clearance, 'clearance');
  return taper(Math.max(...clearances), Math.min(...clearances));
}

function sortedBands(card: CardBand[]): CardBand[] {
  if (card.length < 2) throw new RangeError('A gauge card needs at least two bands.');
  for (const band of card) {
    requireLength(band.width, 'width of a band');
    requireLength(band.clearance, 'clearance of a band');
  }
  const bands = card.toSorted((a, b) => a.width - b.width);
  for (let i = 1; i < bands.length; i += 1) {
    const [narrow, wide] = [bandAt(bands, i - 1), bandAt(bands, i)];
    if (wide.width === narrow.width || wide.clearance >= narrow.clearance) {
      throw new RangeError('On a gauge card a wider band must stand for a smaller clearance.');
    }
  }
  return bands;
}

function requireOnCard(bands: CardBand[], width: number): void {
  const last = bands.length - 1;
  const isTooNarrow = isBeyondHalfAStep(width, bandAt(bands, 0).width, bandAt(bands, 1).width);
  const isTooWide = isBeyondHalfAStep(width, bandAt(bands, last).width, bandAt(bands, last - 1).width);
  if (isTooNarrow || isTooWide) {
    const side = isTooNarrow ? 'narrower' : 'wider';
    throw new RangeError(`The crushed width is ${side} than this card can tell. Take another thread.`);
  }
}

/** Whether the width lies past the end band, away from its neighbour, by more than half the step between them. */
function isBeyondHalfAStep(width: number, end: number, neighbour: number): boolean {
  const past = subtractExact(exactOf(width), exactOf(end));
  const step = subtractExact(exactOf(end), exactOf(neighbour));
  const outward = step.units < 0n ? -1n : 1n;
  const twicePast = { units: past.units * outward * 2n, scale: past.scale };
  return compareExact(twicePast, { units: step.units * outward, scale: step.scale }) > 0;
}

function interpolate(bands: CardBand[], upper: number, width: number): number {
  const [a, b] = [bandAt(bands, upper - 1), bandAt(bands, upper)];
  return a.clearance + ((width - a.width) / (b.width - a.width)) * (b.clearance - a.clearance);
}

/** The step of clearance between a band and the one before it; 0 where the card ends. */
function stepBelow(bands: CardBand[], index: number): number {
  const [a, b] = [bands[index - 1], bands[index]];
  if (a === undefined || b === undefined) return 0;
  return exactToNumber(subtractExact(exactOf(a.clearance), exactOf(b.clearance)));
}

function bandAt(bands: CardBand[], index: number): CardBand {
  const band = bands[index];
  if (band === undefined) throw new RangeError('The card has no such band.');
  return band;
}

function requireLength(value: number, name: string): void {
  if (!Number.isFinite(value) || value <= 0) throw new RangeError(`The ${name} must be greater than zero.`);
}
