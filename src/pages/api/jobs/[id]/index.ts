import { endpoint } from '@/server/http';
import { jobSummaryAnswer } from '@/server/job-answers';
import { getJob } from '@/server/jobs';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/jobs/{id}',
    summary: 'One job: its progress, what blocks it, who works on it, and its folded state',
    who: 'session',
    answer: jobSummaryAnswer,
  },
  async ({ app, actor, params }) => {
    const { jobState, ...job } = await getJob(app, actor, params.id ?? '');
    return { ...job, jobState: { ...jobState, plan: { ...jobState.plan } } };
  },
);
