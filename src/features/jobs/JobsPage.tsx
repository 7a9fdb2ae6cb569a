import { QueryClientProvider } from '@tanstack/react-query';
import { useState, type ReactNode } from 'react';
import { Button } from '@/components/Button';
import { ButtonLink } from '@/components/ButtonLink';
import { DataTable, type DataColumn } from '@/components/DataTable';
import { ErrorNote } from '@/components/ErrorNote';
import { Subnav } from '@/components/Subnav';
import { holdPointName } from '@/domain/signature-view';
import { dayAndTime, dayWords } from '@/domain/time-words';
import { atWork } from './at-work';

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

const COLUMNS: DataColumn[] = [
  { key: 'number', label: 'job' },
  { key: 'vehicle', label: 'vehicle' },
  { key: 'at', label: 'where it stands', isWide: true },
  { key: 'done', label: 'steps', isFigure: true },
  { key: 'waits', label: 'waits for' },
  { key: 'working', label: 'at work' },
  { key: 'promised', label: 'promised', align: 'right' },
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

function cellsOf(job: JobLine, zone: string): Record<string, ReactNode> {
  const working = atWork(job);
  return {
    number: (
      <a href={`/jobs/${job.id}`} className="job-link figure">
        {job.number}
      </a>
    ),
    vehicle: (
      <>
        <span className="whitespace-nowrap">{job.registration ?? 'erased'}</span>
        <span className="cell-note">{job.engine}</span>
      </>
    ),
    at: <WhereItStands job={job} />,
    done: <StepsDone done={job.done} total={job.total} />,
    waits: <WaitsFor job={job} />,
    working: working && (
      <>
        {working.name}
        <span className="cell-note">since {dayAndTime(working.since, zone)}</span>
      </>
    ),
    promised: job.promisedOn === undefined ? '' : dayWords(job.promisedOn.slice(0, 10)),
  };
}

function WhereItStands({ job }: { job: JobLine }) {
  if (job.phase === 'handed over' || job.phase === 'ended unfinished') return job.phase;
  const phase = job.phase === 'parked' ? 'parked, made safe' : (job.at ?? '');
  return (
    <>
      {phase}
      {job.next && <span className="cell-note">{job.next.title}</span>}
    </>
  );
}

/** The figure, over a line that is as far along as the job. */
function StepsDone({ done, total }: { done: number; total: number }) {
  const share = total === 0 ? 0 : Math.round((done / total) * 1000) / 10;
  return (
    <>
      {done}/{total}
      <svg className="job-share" aria-hidden="true">
        <line className="job-share-all" x1="0" x2="100%" y1="50%" y2="50%" />
        <line className="job-share-done" x1="0" x2={`${share}%`} y1="50%" y2="50%" />
      </svg>
    </>
  );
}

function WaitsFor({ job }: { job: JobLine }) {
  const waits = [
    ...job.waiting.map(({ title }) => `signature: ${holdPointName(title)}`),
    ...(job.blocks > 0 ? [`${job.blocks} ${job.blocks === 1 ? 'deviation' : 'deviations'}`] : []),
  ];
  return waits.map((words) => (
    <b key={words} className="block">
      {words}
    </b>
  ));
}
