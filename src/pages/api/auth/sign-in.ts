import * as z from 'zod';
import { email, givenPassword, nothing } from '@/server/fields';
import { endpoint } from '@/server/http';
import { signIn } from '@/server/sign-in';

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/auth/sign-in',
    summary: 'Sign in at this browser, beside whoever is signed in there already',
    who: 'anyone',
    body: z.strictObject({ email, password: givenPassword }),
    answer: nothing,
  },
  async ({ app, request, body, cookies }) => {
    cookies.push(...(await signIn(app, request, body)));
    return { ok: true as const };
  },
);
