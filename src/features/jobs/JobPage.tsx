import { QueryClientProvider } from '@tanstack/react-query';
import { useState } from 'react';
import { ButtonLink } from '@/components/ButtonLink';
import { EngineBelow } from '@/components/EngineBelow';
import { ErrorNote } from '@/components/ErrorNote';
import { engineView } from '@/domain/engine-view';
import { JobBlocks } from './JobBlocks';
import { JobClearances } from './JobClearances';
import { JobErasure } from './JobErasure';
import { JobCorrections } from './JobCorrections';
import { JobFilm } from './JobFilm';
import { JobFacts, JobHeadFacts } from './JobFacts';
import { JobKept } from './JobKept';
import { JobNext } from './JobNext';
import { JobPeople } from './JobPeople';
import { JobPhotos } from './JobPhotos';
import { JobProgress } from './JobProgress';
import { JobSetAside } from './JobSetAside';
import { JobSignatures } from './JobSignatures';
import { JobStanding } from './JobStanding';
import { JobWear } from './JobWear';
import { jobAnswer, type JobAnswer } from './job-answer';
import { newQueryClient, useServer } from '@/offline/use-server';

export interface JobPageProps {
  job: string;
  zone: string;
  /** May this person put people on the job? */
  canAssign: boolean;
  /** May this person run jobs on the Floor? */
  canRun: boolean;
  canReadTrail: boolean;
  /** Who looks, if they may countersign and revoke. */
  judge?: { id: string; name: string } | undefined;
  /** May this person erase who the customer was? */
  canErase?: boolean | undefined;
}

const HAS_ENDED: readonly string[] = ['handed over', 'ended unfinished'];

/** One job: how far it is, what blocks it, who works on it, and what is known of it. */
export function JobPage(props: JobPageProps) {
  const [client] = useState(newQueryClient);
  return (
    <QueryClientProvider client={client}>
      <LoadedJob {...props} />
    </QueryClientProvider>
  );
}

function LoadedJob(props: JobPageProps) {
  const { data: job, error } = useServer(`/api/jobs/${props.job}`, jobAnswer);
  if (job) return <Job {...props} answer={job} />;
  if (error)
    return (
      <ErrorNote
        happened={error.message}
        kept="The job is as it was."
        next="It is asked for again by itself."
      />
    );
  return <p role="status">Reading the job</p>;
}

function Job({
  answer,
  zone,
  canAssign,
  canRun,
  canReadTrail,
  canErase = false,
  judge,
}: JobPageProps & { answer: JobAnswer }) {
  const { jobState } = answer;
  const onThisJob = judge && { ...judge, job: answer.id };
  const next = answer.next && jobState.plan.steps.find(({ id }) => id === answer.next?.step);
  return (
    <>
      <div className="page-head">
        <h1 className="page-title">
          Job <span className="figure">{answer.number}</span>, {answer.registration ?? 'registration erased'}
        </h1>
        <div className="form-actions no-print">
          {canReadTrail && (
            <ButtonLink href={`/jobs/${answer.id}/trail`} look="quiet">
              Read the trail
            </ButtonLink>
          )}
          {canRun && (
            <ButtonLink href={`/floor#job=${answer.id}`} look="main">
              Run on the Floor
            </ButtonLink>
          )}
        </div>
      </div>
      <JobKept job={answer.id} />
      <JobHeadFacts job={answer} zone={zone} />
      <div className="mt-4">
        <JobStanding state={jobState} zone={zone} />
      </div>
      <JobProgress
        progress={answer.progress}
        phase={answer.phase}
        at={answer.at}
        hasNext={answer.next !== undefined}
      />
      <div className="job-columns">
        <div className="job-engine">
          <section className="part">
            <h2 className="part-title">The engine from below</h2>
            <EngineBelow {...engineView(jobState, next, zone)} />
          </section>
          <JobClearances state={jobState} />
        </div>
        <div className="job-state">
          <JobBlocks
            state={jobState}
            zone={zone}
            waiting={answer.waiting}
            missingPhotographs={answer.missingPhotographs}
            tablets={answer.tablets}
          />
          <JobCorrections state={jobState} zone={zone} judge={onThisJob} />
          <JobSetAside job={answer.id} zone={zone} />
          <JobNext state={jobState} />
          <JobPeople job={answer} zone={zone} canAssign={canAssign} />
          <JobSignatures state={jobState} zone={zone} judge={onThisJob} />
          <JobWear state={jobState} zone={zone} />
          <JobFilm state={jobState} />
          <JobPhotos
            state={jobState}
            zone={zone}
            missing={answer.missingPhotographs}
            elsewhere={answer.photographsElsewhere}
          />
          {canErase && HAS_ENDED.includes(jobState.phase) && <JobErasure job={answer} />}
        </div>
        <JobFacts job={answer} />
      </div>
    </>
  );
}
