import * as z from 'zod';
import { endpoint } from '@/server/http';
import { floorJobAnswer } from '@/server/job-answers';
import { listOpenJobs } from '@/server/jobs';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/floor/jobs',
    summary: 'The open jobs as tablets keep them, without contact data',
    who: 'session or tablet',
    answer: z.strictObject({ jobs: z.array(floorJobAnswer) }),
  },
  async ({ app, asker }) => ({
    jobs: (await listOpenJobs(app.db, asker)).map(
      ({ id, number, label, engine, registration, plan, phase, head, people, promisedOn }) => ({
        ...{ id, number, label, engine, registration, plan, phase, head, promisedOn },
        people: people.map((person) => person.id),
      }),
    ),
  }),
);
