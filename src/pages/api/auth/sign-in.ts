import * as z from 'zod';
import { email, givenPassword, role } from '@/server/fields';
import { endpoint } from '@/server/http';
import { getActor } from '@/server/session';
import { signIn } from '@/server/sign-in';

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/auth/sign-in',
    summary: 'Sign in at this browser, beside whoever is signed in there already',
    who: 'anyone',
    body: z.strictObject({ email, password: givenPassword }),
    answer: z.strictObject({ personId: z.string(), name: z.string(), roles: z.array(role) }),
  },
  async ({ app, request, body, cookies }) => {
    const signedIn = await signIn(app, request, body);
    const { personId, name, roles } = await getActor(app.db, signedIn.personId);
    cookies.push(...signedIn.cookies);
    return { personId, name, roles: [...roles] };
  },
);
