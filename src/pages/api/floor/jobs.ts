import * as z from 'zod';
import { endpoint } from '@/server/http';
import { floorJobAnswer } from '@/server/job-answers';
import { listJobTablets } from '@/server/job-tablets';
import { listOpenJobs } from '@/server/jobs';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/floor/jobs',
    summary: 'The open jobs as tablets keep them, without contact data',
    who: 'session or tablet',
    answer: z.strictObject({ jobs: z.array(floorJobAnswer) }),
  },
  async ({ app, asker }) => {
    const jobs = await listOpenJobs(app.db, asker);
    const tablets = await listJobTablets(
      app.db,
      jobs.map(({ id }) => id),
    );
    return {
      jobs: jobs.map(
        ({ id, number, label, engine, registration, plan, phase, head, people, promisedOn }) => ({
          ...{ id, number, label, engine, registration, plan, phase, head, promisedOn },
          people: people.map((person) => person.id),
          tablets: tablets.get(id) ?? [],
        }),
      ),
    };
  },
);
