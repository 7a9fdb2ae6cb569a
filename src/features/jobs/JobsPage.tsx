import { QueryClientProvider } from '@tanstack/react-query';
import { useState } from 'react';
import { Button } from '@/components/Button';
import { ButtonLink } from '@/components/ButtonLink';
import { DataTable } from '@/components/DataTable';
import { ErrorNote } from '@/components/ErrorNote';
import { Subnav } from '@/components/Subnav';
import { dayAndTime, dayWords } from '@/domain/time-words';
import { jobListAnswer, type JobLine } from './job-answer';
import { newQueryClient, useServerList } from '@/offline/use-server';

export interface JobsPageProps {
  zone: string;
  /** May this person open a job? */
  canOpen: boolean;
  /** Which jobs: those that run, or those that are over. */
  isOver: boolean;
}

/** The jobs of the workshop, the newest first, with what each waits for. */
export function JobsPage(props: JobsPageProps) {
  const [client] = useState(newQueryClient);
  return (
    <QueryClientProvider client={client}>
      <JobList {...props} />
    </QueryClientProvider>
  );
}

const COLUMNS = [
  { key: 'number', label: 'job' },
  { key: 'vehicle', label: 'vehicle' },
  { key: 'engine', label: 'engine' },
  { key: 'at', label: 'where it stands', isWide: true },
  { key: 'done', label: 'steps', isFigure: true },
  { key: 'waits', label: 'waits for' },
  { key: 'working', label: 'at work' },
  { key: 'promised', label: 'promised' },
];

function JobList({ zone, canOpen, isOver }: JobsPageProps) {
  const list = useServerList('/api/jobs', jobListAnswer);
  const all = list.data?.pages.flatMap(({ jobs }) => jobs) ?? [];
  const jobs = all.filter(({ state }) => (state === 'handed over' || state === 'ended') === isOver);
  return (
    <>
      <div className="page-head">
        <h1 className="page-title">Jobs</h1>
        {canOpen && (
          <ButtonLink href="/jobs/new" look="main">
            Open a job
          </ButtonLink>
        )}
      </div>
      <Subnav
        label="Which jobs"
        links={[
          { href: '/jobs', label: 'In the workshop', isCurrent: !isOver },
          { href: '/jobs?over=1', label: 'Handed over or ended', isCurrent: isOver },
        ]}
      />
      {list.error && (
        <ErrorNote
          happened={list.error.message}
          kept="No job was changed."
          next="The list is asked for again by itself."
        />
      )}
      {list.isPending ? (
        <p role="status">Reading the jobs</p>
      ) : (
        <DataTable
          caption={isOver ? 'Jobs that are over' : 'Jobs in the workshop'}
          columns={COLUMNS}
          rows={jobs.map((job) => ({ key: job.id, cells: cellsOf(job, zone) }))}
          emptyWords={isOver ? 'No job is over yet.' : 'No job is in the workshop. A supervisor opens one.'}
        />
      )}
      {list.hasNextPage && (
        <Button look="quiet" onClick={() => void list.fetchNextPage()} isBusy={list.isFetchingNextPage}>
          Older jobs
        </Button>
      )}
    </>
  );
}

function cellsOf(job: JobLine, zone: string): Record<string, React.ReactNode> {
  return {
    number: (
      <a href={`/jobs/${job.id}`} className="figure">
        {job.number}
      </a>
    ),
    vehicle: job.registration ?? 'erased',
    engine: job.engine,
    at: whereItStands(job),
    done: `${job.done}/${job.total}`,
    waits: waitsFor(job),
    working: job.working ? `${job.working.name}, ${dayAndTime(job.working.since, zone)}` : '',
    promised: job.promisedOn === undefined ? '' : dayWords(job.promisedOn.slice(0, 10)),
  };
}

function whereItStands(job: JobLine): string {
  if (job.phase === 'handed over' || job.phase === 'ended unfinished') return job.phase;
  const phase = job.phase === 'parked' ? 'parked, made safe' : (job.at ?? '');
  return job.next ? `${phase}: ${job.next.title}` : phase;
}

function waitsFor(job: JobLine): React.ReactNode {
  const waits = [
    ...job.waiting.map(({ title }) => `signature: ${title}`),
    ...(job.blocks > 0 ? [`${job.blocks} ${job.blocks === 1 ? 'deviation' : 'deviations'}`] : []),
  ];
  return waits.length === 0 ? '' : <b>{waits.join(', ')}</b>;
}
