import * as z from 'zod';
import { TORQUE_TOOL_CLASSES, TORQUE_TOOL_TYPES } from '@/domain/tool';
import { calibrationAnswer, toolAnswer } from '@/server/answers';
import { decimal, line } from '@/server/fields';
import { endpoint } from '@/server/http';
import { changeTool, getTool } from '@/server/tools';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/tools/{id}',
    summary: 'One tool with its calibrations',
    who: 'session',
    answer: toolAnswer.extend({ calibrations: z.array(calibrationAnswer) }),
  },
  async ({ app, actor, params }) => getTool(app.db, actor, params.id ?? ''),
);

export const PATCH = endpoint(
  {
    method: 'PATCH',
    path: '/api/tools/{id}',
    summary: 'Correct a tool’s facts, withdraw it or take it back; its due date moves only by a calibration',
    who: ['supervisor', 'quality lead', 'owner'],
    body: z.strictObject({
      name: line(80).optional(),
      kind: line(40).optional(),
      serial: line(60).optional(),
      rangeLow: decimal.nullable().optional(),
      rangeHigh: decimal.nullable().optional(),
      unit: line(20).nullable().optional(),
      cycleLimit: z.int().min(1).nullable().optional(),
      torqueType: z.enum(TORQUE_TOOL_TYPES).nullable().optional(),
      torqueClass: z.enum(TORQUE_TOOL_CLASSES).nullable().optional(),
      state: z.enum(['in use', 'withdrawn']).optional(),
    }),
    answer: toolAnswer,
  },
  async ({ app, actor, params, body }) =>
    app.db.transaction().execute((trx) => changeTool(trx, actor, params.id ?? '', body, app)),
);
