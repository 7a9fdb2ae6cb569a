import * as z from 'zod';
import { personAnswer } from '@/server/answers';
import { setAuthorisation } from '@/server/authorisations';
import { day, line, personName, roles } from '@/server/fields';
import { endpoint } from '@/server/http';
import { changeRoles, getPerson, renamePerson, setActive } from '@/server/people';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/people/{id}',
    summary: 'One person',
    who: 'session',
    answer: personAnswer,
  },
  async ({ app, actor, params }) => getPerson(app.db, actor, params.id ?? ''),
);

export const PATCH = endpoint(
  {
    method: 'PATCH',
    path: '/api/people/{id}',
    summary:
      'Change roles, say until when and by which certificate somebody signs, let a person in or out, or correct a name under which nothing is signed',
    who: ['owner'],
    body: z.strictObject({
      name: personName.optional(),
      roles: roles.optional(),
      active: z.boolean().optional(),
      authorisation: z
        .strictObject({
          certificate: z.strictObject({ number: line(60), kind: line(60) }).nullable(),
          authorisedUntil: day.nullable(),
        })
        .optional(),
    }),
    answer: personAnswer,
  },
  async ({ app, actor, params, body }) =>
    app.db.transaction().execute(async (trx) => {
      const id = params.id ?? '';
      if (body.name !== undefined) await renamePerson(trx, actor, id, body.name, app);
      if (body.roles !== undefined) await changeRoles(trx, actor, id, body.roles, app);
      if (body.authorisation !== undefined) await setAuthorisation(trx, actor, id, body.authorisation, app);
      if (body.active !== undefined) await setActive(trx, actor, id, body.active, app);
      return getPerson(trx, actor, id);
    }),
);
