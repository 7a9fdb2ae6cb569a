import * as z from 'zod';
import { endpoint } from '@/server/http';
import { getPlanText } from '@/server/plans';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/plans/{hash}',
    summary: 'A plan, exactly as it was hashed',
    who: 'session or tablet',
    answer: z.looseObject({ v: z.literal(1) }),
  },
  async ({ app, asker, params }) =>
    new Response(await getPlanText(app.db, asker, params.hash ?? ''), {
      headers: {
        'content-type': 'application/json',
        'cache-control': 'private, max-age=31536000, immutable',
      },
    }),
);
