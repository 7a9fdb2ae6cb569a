import * as z from 'zod';
import { deviceAnswer } from '@/server/answers';
import { changeDevice } from '@/server/device-changes';
import { line } from '@/server/fields';
import { endpoint } from '@/server/http';

export const PATCH = endpoint(
  {
    method: 'PATCH',
    path: '/api/devices/{id}',
    summary: 'Rename a tablet, declare it lost, or take it back into use',
    who: ['supervisor', 'owner'],
    body: z.strictObject({
      name: line(60).optional(),
      state: z.enum(['active', 'lost']).optional(),
      reason: line(500).optional(),
    }),
    answer: deviceAnswer,
  },
  async ({ app, actor, params, body }) => changeDevice(app, actor, params.id ?? '', body),
);
