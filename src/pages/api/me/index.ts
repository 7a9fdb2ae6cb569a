import * as z from 'zod';
import { role } from '@/server/fields';
import { endpoint } from '@/server/http';
import { getPerson } from '@/server/people';
import { listSignedIn } from '@/server/session';

const someone = { personId: z.string(), name: z.string(), roles: z.array(role) };

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/me',
    summary: 'Who is active at this browser, and everybody who is signed in there side by side',
    who: 'session',
    answer: z.strictObject({
      actor: z.strictObject({ ...someone, email: z.string(), hasPin: z.boolean() }),
      sideBySide: z.array(z.strictObject({ ...someone, isActive: z.boolean(), sessionUntil: z.string() })),
    }),
  },
  async ({ app, request, actor }) => {
    const { name, roles, email = '', hasPin } = await getPerson(app.db, actor, actor.personId);
    const signedIn = await listSignedIn(app, request);
    return {
      actor: { personId: actor.personId, name, roles, email, hasPin },
      sideBySide: signedIn.map((person) => ({
        personId: person.personId,
        name: person.name,
        roles: [...person.roles],
        isActive: person.isActive,
        sessionUntil: person.sessionUntil,
      })),
    };
  },
);
