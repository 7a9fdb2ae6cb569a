import * as z from 'zod';
import { nothing, password, secret } from '@/server/fields';
import { endpoint } from '@/server/http';
import { setPasswordByLink } from '@/server/one-time-links';

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/set-password',
    summary: 'Set your password through the one-time link that the owner gave you',
    who: 'anyone',
    body: z.strictObject({ token: secret, password }),
    answer: nothing,
  },
  async ({ app, body }) => {
    await setPasswordByLink(app, body);
    return { ok: true as const };
  },
);
