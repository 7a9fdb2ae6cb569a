import * as z from 'zod';
import { endpoint } from '@/server/http';
import { makePasswordLink } from '@/server/one-time-links';

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/people/{id}/password-link',
    summary: 'A new one-time link by which a person sets their password; earlier links end',
    who: ['owner'],
    body: z.strictObject({}),
    answer: z.strictObject({ link: z.string(), expiresAt: z.string() }),
    status: 201,
  },
  async ({ app, actor, params }) =>
    app.db.transaction().execute((trx) => makePasswordLink(trx, actor, params.id ?? '', app)),
);
