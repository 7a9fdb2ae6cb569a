import * as z from 'zod';
import { role } from '@/server/fields';
import { endpoint } from '@/server/http';
import { getPerson } from '@/server/people';
import { listSignedIn } from '@/server/session';

const someone = { id: z.string(), name: z.string(), roles: z.array(role) };

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/me',
    summary: 'Who is active at this browser, and who else is signed in there',
    who: 'session',
    answer: z.strictObject({
      person: z.strictObject({ ...someone, email: z.string(), hasPin: z.boolean() }),
      signedIn: z.array(z.strictObject({ ...someone, isActive: z.boolean() })),
    }),
  },
  async ({ app, request, actor }) => {
    const person = await getPerson(app.db, actor, actor.personId);
    const signedIn = await listSignedIn(app, request);
    const { id, name, roles, email = '', hasPin } = person;
    return {
      person: { id, name, roles, email, hasPin },
      signedIn: signedIn.map((other) => ({
        id: other.personId,
        name: other.name,
        roles: [...other.roles],
        isActive: other.isActive,
      })),
    };
  },
);
