import * as z from 'zod';
import { cursor } from '@/server/fields';
import { endpoint } from '@/server/http';
import { listSetAside } from '@/server/refused-entries';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/jobs/{id}/set-aside',
    summary:
      'What was refused in a job and is kept, the newest first, a page at a time; technicians see their own',
    who: 'session',
    query: z.strictObject({ cursor }),
    answer: z.strictObject({
      setAside: z.array(
        z.strictObject({
          id: z.string(),
          words: z.string(),
          code: z.string(),
          reason: z.string(),
          at: z.string(),
          madeAt: z.string().optional(),
          by: z.string().optional(),
          tablet: z.string().optional(),
        }),
      ),
      cursor: z.string().optional(),
    }),
  },
  async ({ app, actor, params, query }) => listSetAside(app.db, actor, params.id ?? '', query),
);
