import * as z from 'zod';
import { TORQUE_TOOL_CLASSES, TORQUE_TOOL_TYPES } from '@/domain/tool';
import { toolAnswer } from '@/server/answers';
import { cursor, day, decimal, line } from '@/server/fields';
import { endpoint } from '@/server/http';
import { addTool, listTools } from '@/server/tools';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/tools',
    summary:
      'Every tool, also the withdrawn, by name, a page at a time; or those in use whose date is near, or past',
    who: 'session',
    query: z.strictObject({ cursor, show: z.enum(['due', 'past']).optional() }),
    answer: z.strictObject({ tools: z.array(toolAnswer), cursor: z.string().optional() }),
  },
  async ({ app, actor, query }) => listTools(app.db, actor, query, app.clock),
);

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/tools',
    summary: 'Add a tool',
    who: ['supervisor', 'quality lead', 'owner'],
    body: z.strictObject({
      name: line(80),
      kind: line(40),
      serial: line(60),
      rangeLow: decimal.nullable().default(null),
      rangeHigh: decimal.nullable().default(null),
      unit: line(20).nullable().default(null),
      dueOn: day.nullable().default(null),
      cycleLimit: z.int().min(1).nullable().default(null),
      torqueType: z.enum(TORQUE_TOOL_TYPES).nullable().default(null),
      torqueClass: z.enum(TORQUE_TOOL_CLASSES).nullable().default(null),
    }),
    answer: toolAnswer,
    status: 201,
  },
  async ({ app, actor, body }) => app.db.transaction().execute((trx) => addTool(trx, actor, body, app)),
);
