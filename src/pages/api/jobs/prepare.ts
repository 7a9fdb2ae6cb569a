import * as z from 'zod';
import { endpoint } from '@/server/http';
import { nextJobNumber } from '@/server/job-opening';
import { preparePlan } from '@/server/plans';

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/jobs/prepare',
    summary: 'Compile the plan of a job that is about to be opened, and propose its number',
    who: ['supervisor', 'owner'],
    body: z.strictObject({ route: z.string().max(80), options: z.record(z.string(), z.string().max(80)) }),
    answer: z.strictObject({
      number: z.string(),
      plan: z.string(),
      planBody: z.looseObject({ v: z.literal(1) }),
    }),
  },
  async ({ app, actor, body }) =>
    app.db.transaction().execute(async (trx) => {
      const { hash, plan } = await preparePlan(trx, actor, body, app);
      return { number: await nextJobNumber(trx, actor, app), plan: hash, planBody: { ...plan } };
    }),
);
