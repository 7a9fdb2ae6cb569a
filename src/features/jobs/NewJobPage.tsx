import { QueryClientProvider } from '@tanstack/react-query';
import { useState } from 'react';
import { ErrorNote } from '@/components/ErrorNote';
import { NewJobForm } from './NewJobForm';
import { peopleAnswer, routesAnswer } from './new-job-choices';
import { newQueryClient, useServer } from '@/offline/use-server';

/** Opening a job: the form once its choices are here. */
export function NewJobPage({ actor }: { actor: string }) {
  const [client] = useState(newQueryClient);
  return (
    <QueryClientProvider client={client}>
      <div className="page-head">
        <h1 className="page-title">Open a job</h1>
      </div>
      <LoadedForm actor={actor} />
    </QueryClientProvider>
  );
}

function LoadedForm({ actor }: { actor: string }) {
  const routes = useServer('/api/routes', routesAnswer);
  const workshop = useServer('/api/workshop', peopleAnswer);
  const error = routes.error ?? workshop.error;
  if (routes.data && workshop.data) {
    const people = workshop.data.people.filter(
      ({ active, roles }) => active && roles.some((role) => role === 'technician' || role === 'supervisor'),
    );
    return <NewJobForm actor={actor} routes={routes.data.routes} people={people} />;
  }
  if (error)
    return (
      <ErrorNote
        happened={error.message}
        kept="Nothing was opened."
        next="It is asked for again by itself."
      />
    );
  return <p role="status">Reading the routes</p>;
}
