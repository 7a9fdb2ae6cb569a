import { useState } from 'react';
import { useForm, useWatch } from 'react-hook-form';
import { Button } from '@/components/Button';
import { ErrorNote } from '@/components/ErrorNote';
import { Notice } from '@/components/Notice';
import { ArrivalPhotos } from './ArrivalPhotos';
import { AgreementFields, CustomerFields, PeopleFields, VehicleFields } from './NewJobFieldsets';
import { isReadyFor, openNewJob, type ArrivalPhoto, type NewJobFields, type PendingOpening } from './new-job';
import type { PersonChoice, RouteChoice } from './new-job-choices';

export interface NewJobFormProps {
  actor: string;
  routes: RouteChoice[];
  people: PersonChoice[];
  /** Where to go once the job is open; the browser goes there unless told otherwise. */
  goTo?: ((path: string) => void) | undefined;
}

const EMPTY: NewJobFields = {
  route: '',
  options: {},
  registration: '',
  vin: '',
  odometer: '',
  odometerUnit: 'km',
  customerName: '',
  customerEmail: '',
  customerPhone: '',
  approver: '',
  complaint: '',
  oldParts: 'shown to the customer, then packed with the vehicle',
  promisedOn: '',
  note: '',
  people: [],
};

/** The form of a new job. What was typed stays until the job is open. */
export function NewJobForm({ actor, routes, people, goTo = goThere }: NewJobFormProps) {
  const [only] = routes.length === 1 ? routes : [];
  const form = useForm<NewJobFields>({ defaultValues: { ...EMPTY, route: only?.id ?? '' } });
  const [photos, setPhotos] = useState<ArrivalPhoto[]>([]);
  const [trouble, setTrouble] = useState<string>();
  const [opened, setOpened] = useState<{ id: string; trouble: string }>();
  const routeId = useWatch({ control: form.control, name: 'route' });
  const [pending, setPending] = useState<PendingOpening>();
  const route = routes.find(({ id }) => id === routeId);
  const send = form.handleSubmit(async (typed) => {
    setTrouble(undefined);
    if (!(await isReadyFor(actor))) {
      setTrouble('This browser can’t sign for you yet. Sign in here once more, then open the job.');
      return;
    }
    const asked = new Set(route?.options.map(({ id }) => id));
    const options = Object.fromEntries(Object.entries(typed.options).filter(([id]) => asked.has(id)));
    const outcome = await openNewJob(actor, { ...typed, options }, photos, pending, setPending);
    if (!outcome.ok) setTrouble(outcome.why);
    else if (outcome.trouble === undefined) goTo(`/jobs/${outcome.id}`);
    else setOpened({ id: outcome.id, trouble: outcome.trouble });
  });
  if (opened) {
    return (
      <Notice tone="unsure" title="The job is open; the photographs are not in it yet" isAlert>
        <p>{opened.trouble}</p>
        <p>
          <a href={`/jobs/${opened.id}`}>Go to the job</a>
        </p>
      </Notice>
    );
  }
  const parts = { form, route, routes, people };
  return (
    <form className="job-form" method="post" noValidate onSubmit={(event) => void send(event)}>
      {trouble !== undefined && (
        <ErrorNote
          happened={trouble}
          kept="No job was opened twice; what you typed is still here."
          next="Mend it and send it again."
        />
      )}
      <div className="job-form-side">
        <VehicleFields {...parts} />
        <ArrivalPhotos photos={photos} onChange={setPhotos} />
        <PeopleFields {...parts} />
      </div>
      <div className="job-form-side">
        <CustomerFields {...parts} />
        <AgreementFields {...parts} />
      </div>
      <div className="form-actions">
        <Button type="submit" look="main" isBusy={form.formState.isSubmitting}>
          Open the job
        </Button>
      </div>
    </form>
  );
}

function goThere(path: string): void {
  window.location.assign(path);
}
