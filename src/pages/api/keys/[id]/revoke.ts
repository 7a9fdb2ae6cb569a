import * as z from 'zod';
import { keyAnswer } from '@/server/answers';
import { revokeKey } from '@/server/author-keys';
import { endpoint } from '@/server/http';

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/keys/{id}/revoke',
    summary: 'Revoke an author key; what it signed before stays proved',
    who: 'session',
    body: z.strictObject({}),
    answer: keyAnswer,
  },
  async ({ app, actor, params }) =>
    app.db.transaction().execute((trx) => revokeKey(trx, actor, params.id ?? '', app)),
);
