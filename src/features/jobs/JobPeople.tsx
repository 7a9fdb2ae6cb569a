import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import * as z from 'zod/mini';
import { Button } from '@/components/Button';
import { Checkbox } from '@/components/Checkbox';
import { ErrorNote } from '@/components/ErrorNote';
import { Field } from '@/components/Field';
import { dayAndTime } from '@/domain/time-words';
import { offlineOfThisPage } from '@/offline/offline';
import { callServer } from '@/offline/server-call';
import { atWork } from './at-work';
import type { JobAnswer } from './job-answer';
import { peopleAnswer } from './new-job-choices';
import { useServer } from '@/offline/use-server';

export interface JobPeopleProps {
  job: JobAnswer;
  zone: string;
  canAssign: boolean;
}

/** Who is on the job, who works on it now, and who had a hand in it. */
export function JobPeople({ job, zone, canAssign }: JobPeopleProps) {
  const [isEditing, setEditing] = useState(false);
  const working = atWork(job);
  const hands = Object.values(job.jobState.people);
  return (
    <section className="part">
      <h2 className="part-title">Who works on it</h2>
      <dl className="fields">
        <Field label="At work">
          {working ? (
            <>
              <b>{working.name}</b> since {dayAndTime(working.since, zone)}
            </>
          ) : (
            'nobody'
          )}
        </Field>
        <Field label="On the job">
          {job.people.length === 0 ? 'nobody' : job.people.map(({ name }) => name).join(', ')}
        </Field>
        {hands.length > 0 && <Field label="In the record">{hands.join(', ')}</Field>}
      </dl>
      {canAssign && !isEditing && (
        <div className="form-actions">
          <Button look="quiet" onClick={() => setEditing(true)}>
            Change who is on it
          </Button>
        </div>
      )}
      {isEditing && <Assignment job={job} onDone={() => setEditing(false)} />}
    </section>
  );
}

function Assignment({ job, onDone }: { job: JobAnswer; onDone: () => void }) {
  const { data, error } = useServer('/api/workshop', peopleAnswer);
  const [chosen, setChosen] = useState(job.people.map(({ id }) => id));
  const [trouble, setTrouble] = useState<string>();
  const client = useQueryClient();
  const save = async () => {
    const saved = await callServer(offlineOfThisPage(), {
      method: 'POST',
      path: `/api/jobs/${job.id}/people`,
      body: { people: chosen },
      answer: z.looseObject({}),
    });
    if (!saved.ok) {
      setTrouble(saved.why);
      return;
    }
    await client.invalidateQueries();
    onDone();
  };
  const people = data?.people.filter(
    ({ active, roles }) => active && roles.some((r) => r === 'technician' || r === 'supervisor'),
  );
  const words = trouble ?? error?.message;
  return (
    <div className="form mt-3">
      {words !== undefined && (
        <ErrorNote
          happened={words}
          kept="Nobody was changed; your choice is still here."
          next="Try it again."
        />
      )}
      {people?.map(({ id, name, roles }) => (
        <Checkbox
          key={id}
          label={`${name}, ${roles.join(', ')}`}
          checked={chosen.includes(id)}
          onChange={(event) =>
            setChosen(event.target.checked ? [...chosen, id] : chosen.filter((other) => other !== id))
          }
        />
      ))}
      <div className="form-actions">
        <Button look="main" onClick={() => void save()}>
          Keep
        </Button>
        <Button look="quiet" onClick={onDone}>
          Leave as it was
        </Button>
      </div>
    </div>
  );
}
