import { endpoint } from '@/server/http';
import { syncTablet } from '@/server/sync';
import { SYNC_LIMIT_BYTES, syncAnswerSchema, syncBodySchema } from '@/server/sync-body';
import { syncAnswerJson } from '@/server/sync-pull';

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/sync',
    summary: 'Push what a tablet recorded and pull what it lacks, with a verdict for each entry',
    who: 'tablet',
    body: syncBodySchema,
    answer: syncAnswerSchema,
    maxBytes: SYNC_LIMIT_BYTES,
  },
  async ({ app, device, body }) =>
    new Response(syncAnswerJson(await syncTablet(app, device, body)), {
      headers: { 'content-type': 'application/json', 'cache-control': 'no-store' },
    }),
);
