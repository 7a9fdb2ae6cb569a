import { QueryClientProvider } from '@tanstack/react-query';
import { useState } from 'react';
import * as z from 'zod/mini';
import { ErrorNote } from '@/components/ErrorNote';
import { NewJobForm } from './NewJobForm';
import { newQueryClient, useServer } from '@/offline/use-server';

const routesAnswer = z.object({
  routes: z.array(
    z.object({
      id: z.string(),
      name: z.string(),
      engine: z.object({ name: z.string(), code: z.string() }),
      options: z.array(
        z.object({
          id: z.string(),
          ask: z.string(),
          choices: z.array(z.object({ id: z.string(), label: z.string() })),
        }),
      ),
    }),
  ),
});
export type RouteChoice = z.infer<typeof routesAnswer>['routes'][number];

const workshopAnswer = z.object({
  people: z.array(
    z.object({ id: z.string(), name: z.string(), roles: z.array(z.string()), active: z.boolean() }),
  ),
});
export type PersonChoice = z.infer<typeof workshopAnswer>['people'][number];

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
  const workshop = useServer('/api/workshop', workshopAnswer);
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
