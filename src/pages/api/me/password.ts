import * as z from 'zod';
import { givenPassword, nothing, password } from '@/server/fields';
import { endpoint } from '@/server/http';
import { hashNewPassword, requirePassword, storePassword } from '@/server/passwords';

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/me/password',
    summary: 'Change your own password; your sessions elsewhere end',
    who: 'session',
    body: z.strictObject({ current: givenPassword, next: password }),
    answer: nothing,
  },
  async ({ app, actor, body }) => {
    await requirePassword(app.db, actor, body.current, app.clock, 'current');
    const hash = await hashNewPassword(body.next);
    await app.db
      .transaction()
      .execute((trx) => storePassword(trx, actor.personId, hash, { ...app, keepSession: actor.sessionId }));
    return { ok: true as const };
  },
);
