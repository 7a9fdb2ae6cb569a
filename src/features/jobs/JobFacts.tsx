import type { ReactNode } from 'react';
import { Field } from '@/components/Field';
import { dayAndTime, dayWords } from '@/domain/time-words';
import type { JobAnswer } from './job-answer';

const IDENTITY: [field: string, label: string][] = [
  ['registration', 'Registration'],
  ['vin', 'VIN'],
  ['customerName', 'Customer'],
  ['customerEmail', 'E-mail'],
  ['customerPhone', 'Telephone'],
  ['approver', 'May approve extra work'],
  ['complaint', 'Complaint'],
];

/** What is known of the vehicle, the customer and the agreement, as far as this person may see it. */
export function JobFacts({ job, zone }: { job: JobAnswer; zone: string }) {
  const { odometer } = job.jobState;
  return (
    <section className="part">
      <h2 className="part-title">Vehicle and agreement</h2>
      <dl className="fields">
        <Field label="Engine">{job.engine}</Field>
        {odometer && (
          <Field label="Odometer at arrival" isFigure>
            {odometer.value} {odometer.unit}
          </Field>
        )}
        {IDENTITY.map(([field, label]) => identityField(job, field, label))}
        {job.optionWords.map(({ ask, answer }) => (
          <Field key={ask} label={ask}>
            {answer}
          </Field>
        ))}
        <Field label="Old parts">{job.oldParts ?? 'not agreed'}</Field>
        {job.promisedOn !== undefined && (
          <Field label="Promised">{dayWords(job.promisedOn.slice(0, 10))}</Field>
        )}
        <Field label="Opened">
          {job.openedBy.name}, {dayAndTime(job.openedAt, zone)}
        </Field>
        {job.note !== undefined && <Field label="Note">{job.note}</Field>}
      </dl>
    </section>
  );
}

function identityField(job: JobAnswer, field: string, label: string): ReactNode {
  const value = job.identity[field];
  if (value === undefined && !job.withheld.includes(field)) return null;
  return (
    <Field key={field} label={label}>
      {value ?? 'kept from this role'}
    </Field>
  );
}
