import type { ReactNode } from 'react';
import { Field } from '@/components/Field';
import { dateAndTime, dayWords } from '@/domain/time-words';
import type { JobAnswer } from './job-answer';

const IDENTITY: [field: string, label: string, isFigure?: true][] = [
  ['registration', 'Registration', true],
  ['vin', 'VIN', true],
  ['customerName', 'Customer'],
  ['customerEmail', 'E-mail'],
  ['customerPhone', 'Telephone'],
  ['approver', 'May approve extra work'],
  ['complaint', 'Complaint'],
];

/** What is known of the vehicle, the customer and the agreement, as far as this person may see it. */
export function JobFacts({ job }: { job: JobAnswer }) {
  const { odometer } = job.jobState;
  return (
    <section className="part job-facts">
      <h2 className="part-title">Vehicle and agreement</h2>
      <dl className="fields">
        {IDENTITY.map(([field, label, isFigure]) => identityField(job, field, label, isFigure))}
        {odometer && (
          <Field label="Odometer at arrival" isFigure>
            {odometer.value} {odometer.unit}
          </Field>
        )}
        {job.optionWords.map(({ ask, answer }) => (
          <Field key={ask} label={ask}>
            {answer}
          </Field>
        ))}
        <Field label="Old parts">{job.oldParts ?? 'not agreed'}</Field>
        {job.note !== undefined && <Field label="Note">{job.note}</Field>}
      </dl>
    </section>
  );
}

/** The few facts that are looked for first, in a line under the heading. */
export function JobHeadFacts({ job, zone }: { job: JobAnswer; zone: string }) {
  return (
    <dl className="fields job-head-facts">
      <Field label="Engine">{job.engine}</Field>
      <Field label="Promised">
        {job.promisedOn === undefined ? 'not promised' : dayWords(job.promisedOn.slice(0, 10))}
      </Field>
      <Field label="Opened">
        {dateAndTime(job.openedAt, zone)}, {job.openedBy.name}
      </Field>
      <Field label="Last entry">{job.lastAt === undefined ? 'none' : dateAndTime(job.lastAt, zone)}</Field>
    </dl>
  );
}

function identityField(job: JobAnswer, field: string, label: string, isFigure: true | undefined): ReactNode {
  const value = job.identity[field];
  if (value === undefined && !job.withheld.includes(field)) return null;
  return (
    <Field key={field} label={label} isFigure={isFigure === true && value !== undefined}>
      {value ?? 'kept from this role'}
    </Field>
  );
}
