import * as z from 'zod';
import { SECOND_UNITS } from '@/domain/second-unit';
import { nothing } from '@/server/fields';
import { endpoint } from '@/server/http';
import { setSecondUnits } from '@/server/second-units';

export const PUT = endpoint(
  {
    method: 'PUT',
    path: '/api/workshop/units',
    summary: 'Choose whether a second unit is shown beside SI',
    who: ['owner'],
    body: z.strictObject({ shown: z.enum(SECOND_UNITS) }),
    answer: nothing,
  },
  async ({ app, actor, body }) => {
    await app.db.transaction().execute((trx) => setSecondUnits(trx, actor, body.shown, app));
    return { ok: true as const };
  },
);
