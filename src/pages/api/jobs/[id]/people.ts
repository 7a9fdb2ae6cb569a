import { nothing } from '@/server/fields';
import { endpoint } from '@/server/http';
import { peopleBody } from '@/server/job-answers';
import { setJobPeople } from '@/server/jobs';

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/jobs/{id}/people',
    summary: 'Put people on a job, in place of those who were on it',
    who: ['supervisor', 'owner'],
    body: peopleBody,
    answer: nothing,
  },
  async ({ app, actor, params, body }) => {
    await app.db.transaction().execute((trx) => setJobPeople(trx, actor, params.id ?? '', body.people));
    return { ok: true as const };
  },
);
