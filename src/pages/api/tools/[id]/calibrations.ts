import * as z from 'zod';
import { calibrationAnswer } from '@/server/answers';
import { day, decimal, line } from '@/server/fields';
import { endpoint } from '@/server/http';
import { recordCalibration } from '@/server/calibrations';

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/tools/{id}/calibrations',
    summary:
      'Record a calibration; the server judges its readings, and one that does not fail moves the tool’s due date',
    who: ['supervisor', 'quality lead', 'owner'],
    body: z.strictObject({
      on: day,
      dueOn: day,
      certificate: line(80),
      readings: z.array(z.strictObject({ set: decimal, reference: decimal, unit: line(20) })).max(100),
    }),
    answer: calibrationAnswer,
    status: 201,
  },
  async ({ app, actor, params, body }) =>
    app.db.transaction().execute((trx) => recordCalibration(trx, actor, params.id ?? '', body, app)),
);
