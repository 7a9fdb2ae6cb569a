import * as z from 'zod';
import { endpoint } from '@/server/http';
import { readTrail } from '@/server/job-export';
import { trailEntrySchema } from '@/server/sync-body';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/jobs/{id}/trail',
    summary: 'The whole trail of a job with the plans, keys, heads and workshop entries that prove it',
    who: 'session',
    answer: z.looseObject({ entries: z.array(trailEntrySchema) }),
  },
  async ({ app, actor, params }) => {
    const trail = await readTrail(app, actor, params.id ?? '');
    return {
      ...trail,
      entries: trail.entries.map((entry) => ({ ...entry, recorded: { ...entry.recorded } })),
    };
  },
);
