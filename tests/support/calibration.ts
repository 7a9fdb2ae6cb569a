import {
  type CalibratedTool,
  calibrationPoints,
  type CalibrationReading,
  READINGS_A_POINT,
  TORQUE_TOOL_KIND,
} from '@/domain/calibration';

/** What makes a torque wrench of the tests one that can be judged; nothing for other kinds. */
export function classOf(kind: string): { torqueType?: 'II'; torqueClass?: 'A' } {
  return kind === TORQUE_TOOL_KIND ? { torqueType: 'II', torqueClass: 'A' } : {};
}

/** The readings of a calibration that passes; none for kinds that are not judged. */
export function goodReadings(tool: CalibratedTool): CalibrationReading[] {
  if (tool.kind !== TORQUE_TOOL_KIND) return [];
  const { unit } = tool;
  return calibrationPoints(tool).flatMap((set) =>
    Array.from({ length: READINGS_A_POINT }, () => ({ set, reference: set, unit: unit ?? '' })),
  );
}
