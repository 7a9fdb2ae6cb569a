import * as z from 'zod';
import { endpoint } from '@/server/http';
import { readTrail } from '@/server/job-export';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/jobs/{id}/trail',
    summary: 'The signed trail of a job, in the form of its export, for reading on a page',
    who: 'session',
    answer: z.strictObject({
      body: z.looseObject({}),
      publicKey: z.string(),
      signature: z.string(),
    }),
  },
  async ({ app, actor, params }) => {
    const text = await readTrail(app, actor, params.id ?? '');
    return new Response(text, {
      headers: { 'content-type': 'application/json', 'cache-control': 'no-store' },
    });
  },
);
