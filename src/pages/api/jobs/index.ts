import * as z from 'zod';
import { cursor } from '@/server/fields';
import { endpoint, json } from '@/server/http';
import { jobLineAnswer, jobState, openingBody } from '@/server/job-answers';
import { openJob } from '@/server/job-opening';
import { listJobs } from '@/server/jobs';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/jobs',
    summary: 'Jobs that you may see, the newest first, a page at a time',
    who: 'session',
    query: z.strictObject({ cursor, state: jobState.optional() }),
    answer: z.strictObject({ jobs: z.array(jobLineAnswer), cursor: z.string().optional() }),
  },
  async ({ app, actor, query }) => listJobs(app.db, actor, query),
);

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/jobs',
    summary: 'Open a job with its signed first entry; the same again does no harm',
    who: ['supervisor', 'owner'],
    body: openingBody,
    answer: z.strictObject({ id: z.string(), number: z.string() }),
    status: 201,
    statusAgain: 200,
  },
  async ({ app, actor, body }) => {
    const { isNew, ...job } = await openJob(app, actor, body);
    return json(job, isNew ? 201 : 200);
  },
);
