import * as z from 'zod';
import { personAnswer } from '@/server/answers';
import { cursor, email, personName, roles } from '@/server/fields';
import { endpoint } from '@/server/http';
import { makePasswordLink } from '@/server/one-time-links';
import { addPerson, getPerson, listPeople } from '@/server/people';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/people',
    summary: 'Everybody of the workshop, also those who left, by name, a page at a time',
    who: 'session',
    query: z.strictObject({ cursor }),
    answer: z.strictObject({ people: z.array(personAnswer), cursor: z.string().optional() }),
  },
  async ({ app, actor, query }) => listPeople(app.db, actor, query),
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
