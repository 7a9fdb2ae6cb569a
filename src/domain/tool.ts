import { compareExact, exactOf } from '@/domain/decimal';
import { convert, isUnit, measureTheSame, type Unit } from '@/domain/units';

/** A tool of the workshop with what decides whether it may be used. Ranges are decimal text in `unit`. */
export interface Tool {
  id: string;
  name: string;
  kind: string;
  serial: string;
  rangeLow: string | null;
  rangeHigh: string | null;
  unit: string | null;
  /** The last day on which its calibration counts, YYYY-MM-DD; null where it has none. */
  dueOn: string | null;
  state: 'in use' | 'withdrawn';
  cycleLimit: number | null;
  cyclesUsed: number | null;
  /** Type and class of a torque tool by ISO 6789-1:2017; null or absent where they are not known. */
  torqueType?: TorqueToolType | null | undefined;
  torqueClass?: TorqueToolClass | null | undefined;
  /** Why its last calibration failed, in words; null or absent where it did not. */
  failure?: string | null | undefined;
}

/** I indicates the torque, II is set to one. */
export const TORQUE_TOOL_TYPES = ['I', 'II'] as const;
export type TorqueToolType = (typeof TORQUE_TOOL_TYPES)[number];
export const TORQUE_TOOL_CLASSES = ['A', 'B', 'C', 'D', 'E', 'F', 'G'] as const;
export type TorqueToolClass = (typeof TORQUE_TOOL_CLASSES)[number];
/** The classes that each type has: ISO 6789-1:2017, from memory. */
export const CLASSES_OF_TYPE: Readonly<Record<TorqueToolType, readonly TorqueToolClass[]>> = {
  I: ['A', 'B', 'C', 'D', 'E'],
  II: TORQUE_TOOL_CLASSES,
};

/** What a tool is wanted for: the kind of tool, the largest or only value it has to reach, and for which class. */
export interface ToolUse {
  kind: string;
  value?: number | undefined;
  unit?: Unit | undefined;
  criticalClass: 'A' | 'B' | 'C';
}

/** Tools that mean nothing without a calibration. */
export const CALIBRATED_KINDS: readonly string[] = [
  'torque wrench',
  'angle gauge',
  'micrometer',
  'bore gauge',
  'pressure gauge',
];
/** A torque wrench is trusted in its upper four fifths where no lower end is marked (ISO 6789:2003). */
export const FIFTHS = 5;

/**
 * Whether a tool may be used on a day (YYYY-MM-DD in the workshop's zone), and what speaks against it, in words
 * that follow "this tool:". A tool of another kind or withdrawn fits nothing. One that is not known, out of its
 * range, past its date, past its cycle limit or failed by its last calibration is barred from class A; for B and C
 * it is a warning. The due date itself and the limits themselves still count.
 */
export function fitness(
  tool: Tool | undefined,
  use: ToolUse,
  on: string,
): { fit: boolean; reasons: string[] } {
  requireDay(on);
  if (tool === undefined)
    return { fit: use.criticalClass !== 'A', reasons: ['it is not known to the workshop'] };
  const bars = [
    ...(tool.kind === use.kind ? [] : [`its kind is ${tool.kind}, and this needs ${use.kind}`]),
    ...(tool.state === 'in use' ? [] : ['it is withdrawn from use']),
  ];
  const { failure = null } = tool;
  const doubts = [
    ...(failure === null ? [] : [`its last calibration failed: ${failure}`]),
    ...dateDoubts(tool, on),
    ...cycleDoubts(tool),
    ...(tool.kind === use.kind ? rangeDoubts(tool, use) : []),
  ];
  return {
    fit: bars.length === 0 && (doubts.length === 0 || use.criticalClass !== 'A'),
    reasons: [...bars, ...doubts],
  };
}

/**
 * How far a torque tool was off at one point of its calibration, in % of the reference: (set − reference) /
 * reference · 100. Both in the same unit. Source: ISO 6789-1:2017 clause 7.
 */
export function deviationPercent({ set, reference }: { set: number; reference: number }): number {
  requirePositive(set, 'set value');
  requirePositive(reference, 'reference value');
  return ((set - reference) / reference) * 100;
}

/**
 * How far a torque tool may be off, in ± % of the set value, by its type and class; `maximum` is its largest
 * torque in N·m, and up to 10 N·m most classes are given more. Source: ISO 6789-1:2017, 5.1.5.
 */
export function permissibleDeviation(tool: {
  type: TorqueToolType;
  class: TorqueToolClass;
  maximum: number;
}): number {
  requirePositive(tool.maximum, 'largest torque');
  const closer = { I: 'BCE', II: 'ABC' } as const;
  if (!Object.hasOwn(CLASSES_OF_TYPE, tool.type))
    throw new RangeError(`There is no type ${tool.type} of torque tool.`);
  if (!CLASSES_OF_TYPE[tool.type].includes(tool.class)) {
    throw new RangeError(`Torque tools of type ${tool.type} have no class ${tool.class}.`);
  }
  return closer[tool.type].includes(tool.class) && tool.maximum > 10 ? 4 : 6;
}

function dateDoubts({ kind, dueOn }: Tool, on: string): string[] {
  if (dueOn === null) return CALIBRATED_KINDS.includes(kind) ? ['no calibration date of it is known'] : [];
  requireDay(dueOn);
  return on > dueOn ? [`its calibration counted until ${dueOn}`] : [];
}

function cycleDoubts({ cycleLimit, cyclesUsed }: Tool): string[] {
  if (cycleLimit === null || (cyclesUsed ?? 0) <= cycleLimit) return [];
  return [`it has seen ${cyclesUsed ?? 0} cycles of ${cycleLimit} since its calibration`];
}

function rangeDoubts(tool: Tool, use: ToolUse): string[] {
  if (use.value === undefined || use.unit === undefined) return [];
  if (!Number.isFinite(use.value)) throw new RangeError('The value a tool is wanted for must be a number.');
  if (tool.unit === null || !isUnit(tool.unit) || tool.rangeHigh === null) return ['its range is not known'];
  if (!measureTheSame(tool.unit, use.unit))
    return [`it is marked in ${tool.unit}, and this needs ${use.unit}`];
  const value = exactOf(convert(use.value, use.unit, tool.unit));
  const high = exactOf(tool.rangeHigh);
  const low = exactOf(tool.rangeLow ?? (tool.kind === 'torque wrench' ? Number(tool.rangeHigh) / FIFTHS : 0));
  if (compareExact(value, low) >= 0 && compareExact(value, high) <= 0) return [];
  const range =
    tool.rangeLow === null ? `up to ${tool.rangeHigh}` : `from ${tool.rangeLow} to ${tool.rangeHigh}`;
  return [`its range is ${range} ${tool.unit}, and this needs ${use.value} ${use.unit}`];
}

function requireDay(day: string): void {
  const time = /^\d{4}-\d\d-\d\d$/.test(day) ? Date.parse(`${day}T00:00:00Z`) : Number.NaN;
  if (Number.isNaN(time) || !new Date(time).toISOString().startsWith(day)) {
    throw new RangeError(`"${day}" is not a day written as YYYY-MM-DD.`);
  }
}

function requirePositive(value: number, name: string): void {
  if (!Number.isFinite(value) || value <= 0) throw new RangeError(`The ${name} must be greater than zero.`);
}
