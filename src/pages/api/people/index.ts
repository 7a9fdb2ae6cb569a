import * as z from 'zod';
import { personAnswer } from '@/server/answers';
import { email, personName, roles } from '@/server/fields';
import { endpoint } from '@/server/http';
import { makePasswordLink } from '@/server/one-time-links';
import { addPerson, getPerson, listPeople } from '@/server/people';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/people',
    summary: 'Everybody of the workshop, also those who left',
    who: 'session',
    answer: z.strictObject({ people: z.array(personAnswer) }),
  },
  async ({ app, actor }) => ({ people: await listPeople(app.db, actor) }),
);

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/people',
    summary: 'Add a person; the answer holds the one-time link by which they set their password',
    who: ['owner'],
    body: z.strictObject({ name: personName, email, roles }),
    answer: z.strictObject({ person: personAnswer, link: z.string(), expiresAt: z.string() }),
    status: 201,
  },
  async ({ app, actor, body }) =>
    app.db.transaction().execute(async (trx) => {
      const id = await addPerson(trx, actor, body, app);
      const link = await makePasswordLink(trx, actor, id, app);
      return { person: await getPerson(trx, actor, id), ...link };
    }),
);
