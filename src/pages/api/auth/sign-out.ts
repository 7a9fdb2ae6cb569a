import * as z from 'zod';
import { nothing, uuid } from '@/server/fields';
import { endpoint } from '@/server/http';
import { signOut } from '@/server/sign-in';

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/auth/sign-out',
    summary: 'Sign one person out at this browser; the others stay signed in',
    who: 'session',
    body: z.strictObject({ person: uuid.optional() }),
    answer: nothing,
  },
  async ({ app, request, body, actor, cookies }) => {
    cookies.push(...(await signOut(app, request, body.person ?? actor.personId)));
    return { ok: true as const };
  },
);
