import * as z from 'zod';
import { endpoint } from '@/server/http';
import { listWorkshopEntries } from '@/server/workshop-trail';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/workshop/trail',
    summary: 'The workshop’s own trail after an entry, in order',
    who: ['supervisor', 'quality lead', 'auditor', 'owner'],
    query: z.strictObject({
      after: z.coerce.number().pipe(z.int().min(0)).default(0),
      limit: z.coerce.number().pipe(z.int().min(1).max(500)).default(200),
    }),
    answer: z.strictObject({
      entries: z.array(
        z.strictObject({ seq: z.int(), hash: z.string(), entry: z.record(z.string(), z.unknown()) }),
      ),
      /** What to ask for next; none at the end. */
      next: z.int().nullable(),
    }),
  },
  async ({ app, actor, query }) => {
    const entries = await listWorkshopEntries(app.db, actor, query);
    const last = entries.at(-1);
    return { entries, next: last !== undefined && entries.length === query.limit ? last.seq : null };
  },
);
