import * as z from 'zod/mini';
import { CALIBRATION_VERDICTS } from '@/domain/calibration';
import { TORQUE_TOOL_CLASSES, TORQUE_TOOL_TYPES } from '@/domain/tool';

const nullableText = z.nullable(z.string());

const tool = z.object({
  id: z.string(),
  name: z.string(),
  kind: z.string(),
  serial: z.string(),
  rangeLow: nullableText,
  rangeHigh: nullableText,
  unit: nullableText,
  dueOn: nullableText,
  state: z.enum(['in use', 'withdrawn']),
  cycleLimit: z.nullable(z.int()),
  cyclesUsed: z.nullable(z.int()),
  torqueType: z.nullable(z.enum(TORQUE_TOOL_TYPES)),
  torqueClass: z.nullable(z.enum(TORQUE_TOOL_CLASSES)),
  failure: nullableText,
});
export type ToolAnswer = z.infer<typeof tool>;

/** A page of the list of tools. */
export const toolsAnswer = z.object({ tools: z.array(tool), cursor: z.optional(z.string()) });

const calibration = z.object({
  id: z.string(),
  on: z.string(),
  dueOn: z.string(),
  certificate: z.string(),
  readings: z.array(z.object({ set: z.string(), reference: z.string(), unit: z.string() })),
  verdict: z.enum(CALIBRATION_VERDICTS),
  reasons: z.array(z.string()),
});
export type CalibrationAnswer = z.infer<typeof calibration>;

/** One tool with its calibrations, the newest first. */
export const toolAnswer = z.extend(tool, { calibrations: z.array(calibration) });
export type ToolWithCalibrations = z.infer<typeof toolAnswer>;

/** What was done with a tool between its good calibrations. */
export const toolUseAnswer = z.object({
  periods: z.array(
    z.object({
      since: nullableText,
      until: nullableText,
      jobs: z.array(
        z.object({
          job: z.string(),
          number: z.string(),
          steps: z.array(
            z.object({
              step: nullableText,
              title: z.string(),
              entries: z.int(),
              lastAt: z.string(),
            }),
          ),
        }),
      ),
    }),
  ),
});
export type ToolUsePeriod = z.infer<typeof toolUseAnswer>['periods'][number];
