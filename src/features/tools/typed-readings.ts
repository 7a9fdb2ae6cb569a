import {
  type CalibratedTool,
  calibrationPoints,
  type CalibrationJudgement,
  type CalibrationReading,
  isMeasured,
  judgeCalibration,
  READINGS_A_POINT,
  TORQUE_TOOL_KIND,
} from '@/domain/calibration';
import { parseTyped } from '@/domain/decimal';

/** A line of the grid: what the tool was set to, and what stood at the reference, as typed. */
export interface TypedPoint {
  set: string;
  references: string[];
}

/** What is typed of a calibration. */
export interface CalibrationFields {
  on: string;
  dueOn: string;
  certificate: string;
  points: TypedPoint[];
}

/** How many points a tool without a rule is offered. */
const FREE_POINTS = 4;

/** The empty grid for a tool: its three points with five readings each, or a few pairs where it has no rule. */
export function emptyPoints(tool: CalibratedTool): TypedPoint[] {
  if (tool.kind !== TORQUE_TOOL_KIND)
    return Array.from({ length: FREE_POINTS }, () => ({ set: '', references: [''] }));
  return calibrationPoints(tool).map((set) => ({
    set,
    references: Array.from({ length: READINGS_A_POINT }, () => ''),
  }));
}

/** What was typed as the trail stores it; undefined for what is no reading. */
export function typedFigure(text: string, tool: CalibratedTool): string | undefined {
  try {
    const figure = parseTyped(text);
    return tool.kind !== TORQUE_TOOL_KIND || isMeasured(figure) ? figure : undefined;
  } catch (error) {
    if (error instanceof RangeError) return undefined;
    throw error;
  }
}

/** The readings of the grid, and how many cells hold something that is none. */
export function readGrid(
  tool: CalibratedTool,
  points: readonly TypedPoint[],
): { readings: CalibrationReading[]; wrong: number } {
  let wrong = 0;
  const unit = tool.unit ?? '';
  const readings = points.flatMap(({ set, references }) => {
    const filled = references.filter((text) => text.trim() !== '');
    if (filled.length === 0) return [];
    const setFigure = typedFigure(set, tool);
    if (setFigure === undefined) wrong += 1;
    return filled.flatMap((text) => {
      const reference = typedFigure(text, tool);
      if (reference === undefined) wrong += 1;
      return reference === undefined || setFigure === undefined ? [] : [{ set: setFigure, reference, unit }];
    });
  });
  return { readings, wrong };
}

/** What the readings come to, as the server will judge them; undefined while there are none. */
export function judgeTyped(
  tool: CalibratedTool,
  readings: readonly CalibrationReading[],
): CalibrationJudgement | undefined {
  return readings.length === 0 ? undefined : judgeCalibration(tool, readings);
}
