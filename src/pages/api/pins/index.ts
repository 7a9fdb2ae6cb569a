import * as z from 'zod';
import { givenPassword, nothing, pin } from '@/server/fields';
import { endpoint } from '@/server/http';
import { requirePassword } from '@/server/passwords';
import { getPinStatus, hashNewPin, storePin } from '@/server/pins';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/pins',
    summary: 'Your own signing PIN: whether it is set or locked, and how it was tried of late',
    who: 'session',
    answer: z.strictObject({
      hasPin: z.boolean(),
      setAt: z.string().nullable(),
      lockedUntil: z.string().nullable(),
      attempts: z.array(
        z.strictObject({
          at: z.string(),
          outcome: z.enum(['right', 'wrong', 'locked']),
          purpose: z.string(),
          tablet: z.string().nullable(),
        }),
      ),
    }),
  },
  async ({ app, actor }) => getPinStatus(app.db, actor, app.clock),
);

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/pins',
    summary: 'Set your own signing PIN; it needs your password',
    who: 'session',
    body: z.strictObject({ pin, password: givenPassword }),
    answer: nothing,
  },
  async ({ app, actor, body }) => {
    await requirePassword(app.db, actor, body.password, app.clock, 'password');
    const hashed = await hashNewPin(body.pin);
    await app.db.transaction().execute((trx) => storePin(trx, actor, hashed, app));
    return { ok: true as const };
  },
);
