import * as z from 'zod';
import { endpoint } from '@/server/http';
import { readToolUse } from '@/server/tool-use';

const usedIn = z.strictObject({
  step: z.string().nullable(),
  title: z.string(),
  entries: z.int(),
  lastAt: z.string(),
});

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/tools/{id}/use',
    summary:
      'What was done with a tool since its last good calibration, and between two where one failed, job by job',
    who: ['supervisor', 'quality lead', 'auditor', 'owner'],
    answer: z.strictObject({
      periods: z.array(
        z.strictObject({
          since: z.string().nullable(),
          until: z.string().nullable(),
          jobs: z.array(z.strictObject({ job: z.string(), number: z.string(), steps: z.array(usedIn) })),
        }),
      ),
    }),
  },
  async ({ app, actor, params }) => readToolUse(app.db, actor, params.id ?? ''),
);
