import * as z from 'zod';
import { endpoint } from '@/server/http';
import { listRoutes } from '@/server/plans';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/routes',
    summary: 'The routes that a job can be opened with, and the vehicle options to ask',
    who: 'session',
    answer: z.strictObject({
      routes: z.array(
        z.strictObject({
          id: z.string(),
          revision: z.int(),
          name: z.string(),
          engine: z.strictObject({ id: z.string(), name: z.string(), code: z.string() }),
          options: z.array(
            z.strictObject({
              id: z.string(),
              ask: z.string(),
              choices: z.array(z.strictObject({ id: z.string(), label: z.string() })),
            }),
          ),
        }),
      ),
    }),
  },
  async ({ app, actor }) => ({ routes: await listRoutes(app.db, actor) }),
);
