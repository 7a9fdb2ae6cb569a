import {
  compareExact,
  type Exact,
  exactOf,
  exactToNumber,
  formatDecimal,
  isDecimal,
  subtractExact,
} from './decimal';
import { CLASSES_OF_TYPE, deviationPercent, FIFTHS, permissibleDeviation, type Tool } from './tool';
import { convert, isUnit, measureTheSame } from './units';

/*
 * A calibration is judged from the readings on its certificate, never from a tick. Only torque tools have a rule
 * here (ISO 6789-1:2017); of the others the certificate alone speaks.
 */

/** What the certificate says of one pull: what the tool was set to or showed, and the reference, as read. */
export interface CalibrationReading {
  set: string;
  reference: string;
  unit: string;
}

export const CALIBRATION_VERDICTS = ['passed', 'failed', 'not judged'] as const;
export type CalibrationVerdict = (typeof CALIBRATION_VERDICTS)[number];

/** What a tool's calibration is judged by. */
export type CalibratedTool = Pick<
  Tool,
  'kind' | 'rangeLow' | 'rangeHigh' | 'unit' | 'torqueType' | 'torqueClass'
>;

export interface JudgedReading extends CalibrationReading {
  /** In % of the reference, to three places. */
  deviationPercent: string;
  isWithin: boolean;
}

/** All readings at one set value. */
export interface JudgedPoint {
  set: string;
  readings: JudgedReading[];
  isPassed: boolean;
  reasons: string[];
}

export interface CalibrationJudgement {
  verdict: CalibrationVerdict;
  /** How far each reading may be off, in ± %; null where nothing is judged. */
  limitPercent: number | null;
  /** From the lowest to the largest. */
  points: JudgedPoint[];
  /** Why it did not pass, in words; those of the points among them. */
  reasons: string[];
}

/** Of the kinds of tool, the one that there is a rule for. */
export const TORQUE_TOOL_KIND = 'torque wrench';
/** ISO 6789:2003, 6.5, from memory; for preset tools ten are often quoted. */
export const READINGS_A_POINT = 5;
/** The point in the middle, in % of the largest torque: ISO 6789-1:2017. */
const MIDDLE_PERCENT = 60;
/** How far the middle point may lie beside 60 %, in %: wrenches have no mark everywhere. Common practice, no source. */
const MIDDLE_ROOM_PERCENT = 5;
const PERCENT = 100;

/** Whether a text is a reading that a torque can have: decimal text above zero. */
export function isMeasured(text: string): boolean {
  return isDecimal(text) && Number(text) > 0;
}

/** What has to be known of a torque tool before it can be judged, in words; nothing for other kinds. */
export function missingForJudgement(tool: CalibratedTool): string[] {
  if (tool.kind !== TORQUE_TOOL_KIND) return [];
  const { rangeHigh, rangeLow, unit } = tool;
  const isTorque = unit !== null && isUnit(unit) && measureTheSame(unit, 'N·m');
  const hasRange =
    rangeHigh !== null &&
    isMeasured(rangeHigh) &&
    (rangeLow === null || (isDecimal(rangeLow) && compareExact(exactOf(rangeLow), exactOf(rangeHigh)) <= 0));
  return [
    ...(hasClass(tool) ? [] : ['its type and class']),
    ...(hasRange ? [] : ['its range']),
    ...(isTorque ? [] : ['its unit of torque']),
  ];
}

/**
 * The set values that a torque tool is read at, as decimal text in its unit: the lowest value that it is trusted at
 * (the lowest marked one, or 20 % of the largest where none is), 60 % of the largest torque, and the largest. A
 * tool of one value has that one. Source: ISO 6789-1:2017; 20 % from its edition of 2003.
 */
export function calibrationPoints(tool: CalibratedTool): string[] {
  const { lowest, highest } = requireRange(tool);
  const middle = share(highest, MIDDLE_PERCENT);
  if (compareExact(lowest, highest) === 0) return [textOf(highest)];
  return [lowest, ...(compareExact(lowest, middle) < 0 ? [middle] : []), highest].map(textOf);
}

/**
 * Judges a calibration from its certificate's readings: five at least a point, each no further off than type and
 * class allow (ISO 6789-1:2017). Comparisons are exact, and the limit itself still counts. Kinds of tool without a
 * rule are not judged. A RangeError for what is no reading, or a tool of which too little is known.
 */
export function judgeCalibration(
  tool: CalibratedTool,
  readings: readonly CalibrationReading[],
): CalibrationJudgement {
  if (tool.kind !== TORQUE_TOOL_KIND)
    return { verdict: 'not judged', limitPercent: null, points: [], reasons: [] };
  const { unit } = requireRange(tool);
  const limitPercent = limitOf(tool);
  for (const { set, reference } of readings) [set, reference].forEach(requireMeasured);
  const foreign = [...new Set(readings.flatMap((reading) => (reading.unit === unit ? [] : [reading.unit])))];
  const points = groupBySet(readings.filter((reading) => reading.unit === unit)).map((group) =>
    judgePoint(tool, group, limitPercent),
  );
  const reasons = [
    ...foreign.map((other) => `some readings are in ${other}, and it is marked in ${unit}`),
    ...missingPoints(tool, points),
    ...points.flatMap((point) => point.reasons),
  ];
  return { verdict: reasons.length === 0 ? 'passed' : 'failed', limitPercent, points, reasons };
}

/** Why a calibration failed, as one text. */
export function failureWords(reasons: readonly string[]): string {
  return reasons.join('; ');
}

function judgePoint(
  tool: CalibratedTool,
  readings: readonly CalibrationReading[],
  limitPercent: number,
): JudgedPoint {
  const { unit, lowest, highest } = requireRange(tool);
  const set = readings[0]?.set ?? '';
  const judged = readings.map((reading) => judgeReading(reading, limitPercent));
  const off = judged.filter(({ isWithin }) => !isWithin);
  const worst = [...off].sort((a, b) => size(b) - size(a))[0];
  const isInRange = compareExact(exactOf(set), lowest) >= 0 && compareExact(exactOf(set), highest) <= 0;
  const reasons = [
    ...(isInRange
      ? []
      : [`${set} ${unit} is out of its range, from ${textOf(lowest)} to ${textOf(highest)} ${unit}`]),
    ...(readings.length >= READINGS_A_POINT
      ? []
      : [`at ${set} ${unit} there ${are(readings.length)}, and ${READINGS_A_POINT} are needed`]),
    ...(worst === undefined
      ? []
      : [
          `at ${set} ${unit} ${off.length} of ${judged.length} ${off.length === 1 ? 'is' : 'are'} off by more than ± ${limitPercent} %, the worst by ${worst.deviationPercent.replace('-', '−')} %`,
        ]),
  ];
  return { set, readings: judged, isPassed: reasons.length === 0, reasons };
}

function judgeReading(reading: CalibrationReading, limitPercent: number): JudgedReading {
  const [set, reference] = [exactOf(reading.set), exactOf(reading.reference)];
  const off = subtractExact(set, reference);
  const offPercent = { units: (off.units < 0n ? -off.units : off.units) * BigInt(PERCENT), scale: off.scale };
  const allowed = multiply(exactOf(limitPercent), reference);
  const percent = deviationPercent({ set: Number(reading.set), reference: Number(reading.reference) });
  return {
    ...reading,
    deviationPercent: formatDecimal(percent, 3),
    isWithin: compareExact(offPercent, allowed) <= 0,
  };
}

/** Of the three points, those at which nothing was read. */
function missingPoints(tool: CalibratedTool, points: readonly JudgedPoint[]): string[] {
  const { unit, lowest, highest } = requireRange(tool);
  const isRead = (from: Exact, to: Exact) =>
    points.some(({ set }) => compareExact(exactOf(set), from) >= 0 && compareExact(exactOf(set), to) <= 0);
  const [from, to] = [-1, 1].map((side) => share(highest, MIDDLE_PERCENT + side * MIDDLE_ROOM_PERCENT));
  const hasMiddle = compareExact(lowest, share(highest, MIDDLE_PERCENT)) < 0;
  return [
    ...(isRead(lowest, lowest)
      ? []
      : [`there are no readings at ${textOf(lowest)} ${unit}, the lowest that it is trusted at`]),
    ...(!hasMiddle || (from && to && isRead(from, to))
      ? []
      : [`there are no readings at about ${textOf(share(highest, MIDDLE_PERCENT))} ${unit}`]),
    ...(isRead(highest, highest)
      ? []
      : [`there are no readings at ${textOf(highest)} ${unit}, its largest torque`]),
  ];
}

function groupBySet(readings: readonly CalibrationReading[]): CalibrationReading[][] {
  const groups: CalibrationReading[][] = [];
  for (const reading of readings) {
    const group = groups.find(([first]) => first && isSame(first.set, reading.set));
    if (group === undefined) groups.push([reading]);
    else group.push(reading);
  }
  return groups.sort(([a], [b]) => compareExact(exactOf(a?.set ?? '0'), exactOf(b?.set ?? '0')));
}

/** Whether a type and a class were said, and go together. */
function hasClass({ torqueType, torqueClass }: CalibratedTool): boolean {
  return Boolean(torqueType && torqueClass && CLASSES_OF_TYPE[torqueType].includes(torqueClass));
}

function limitOf(tool: CalibratedTool): number {
  const { unit, highest } = requireRange(tool);
  const { torqueType, torqueClass } = tool;
  if (!torqueType || !torqueClass) throw new RangeError('The type and class of this tool are not known.');
  const maximum = convert(exactToNumber(highest), unit, 'N·m');
  return permissibleDeviation({ type: torqueType, class: torqueClass, maximum });
}

function requireRange(tool: CalibratedTool) {
  const missing = missingForJudgement(tool);
  const { unit, rangeHigh, rangeLow } = tool;
  if (missing.length > 0 || unit === null || !isUnit(unit) || rangeHigh === null)
    throw new RangeError(`This tool can’t be judged: ${missing.join(' and ')} must be known first.`);
  const highest = exactOf(rangeHigh);
  const isMarked = rangeLow !== null && Number(rangeLow) > 0;
  return { unit, highest, lowest: isMarked ? exactOf(rangeLow) : share(highest, PERCENT / FIFTHS) };
}

function requireMeasured(text: string): void {
  if (!isMeasured(text)) throw new RangeError(`"${text}" is not a torque that was read.`);
}

function isSame(a: string, b: string): boolean {
  return compareExact(exactOf(a), exactOf(b)) === 0;
}

function size({ deviationPercent: percent }: JudgedReading): number {
  return Math.abs(Number(percent));
}

/** So many per cent of a value, exactly. */
function share(value: Exact, percent: number): Exact {
  return multiply(value, { units: BigInt(percent), scale: 2 });
}

function multiply(a: Exact, b: Exact): Exact {
  return { units: a.units * b.units, scale: a.scale + b.scale };
}

/** The shortest text of an exact value, as "15" and not "15.00". */
function textOf(value: Exact): string {
  const text = formatDecimal(exactToNumber(value), Math.min(value.scale, 12));
  return text.includes('.') ? text.replace(/\.?0+$/, '') : text;
}

function are(count: number): string {
  return count === 1 ? 'is 1 reading' : `are ${count} readings`;
}
