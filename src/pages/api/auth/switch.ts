import * as z from 'zod';
import { nothing, uuid } from '@/server/fields';
import { endpoint } from '@/server/http';
import { switchTo } from '@/server/sign-in';

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/auth/switch',
    summary: 'Make another person who is signed in at this browser the active one',
    who: 'anyone',
    body: z.strictObject({ person: uuid }),
    answer: nothing,
  },
  async ({ app, request, body, cookies }) => {
    cookies.push(...(await switchTo(app, request, body.person)));
    return { ok: true as const };
  },
);
