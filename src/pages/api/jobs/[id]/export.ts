import * as z from 'zod';
import { endpoint } from '@/server/http';
import { exportTrail } from '@/server/job-export';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/jobs/{id}/export',
    summary: 'The signed export of a job’s trail: one file that proves itself',
    who: 'session',
    answer: z.strictObject({
      body: z.looseObject({}),
      publicKey: z.string(),
      signature: z.string(),
    }),
  },
  async ({ app, actor, params }) => {
    const { text, number } = await exportTrail(app, actor, params.id ?? '');
    return new Response(text, {
      headers: {
        'content-type': 'application/json',
        'content-disposition': `attachment; filename="trail-${number.replace(/[^\w-]/g, '-')}.json"`,
        'cache-control': 'no-store',
        'x-content-type-options': 'nosniff',
      },
    });
  },
);
