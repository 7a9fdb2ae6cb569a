import { useWatch, type UseFormReturn } from 'react-hook-form';
import { Checkbox } from '@/components/Checkbox';
import { DateField } from '@/components/DateField';
import { SelectField } from '@/components/SelectField';
import { TextArea } from '@/components/TextArea';
import { TextField } from '@/components/TextField';
import { dayOf } from '@/domain/time-words';
import { checkVin } from '@/domain/vin';
import type { NewJobFields } from './new-job';
import type { PersonChoice, RouteChoice } from './new-job-choices';

interface FieldsetProps {
  form: UseFormReturn<NewJobFields>;
  route: RouteChoice | undefined;
  routes: RouteChoice[];
  people: PersonChoice[];
}

const NEEDED = 'This is needed.';

/** Which vehicle, which engine, and what is fitted to it. */
export function VehicleFields({ form, route, routes }: FieldsetProps) {
  const { errors } = form.formState;
  const vin = useWatch({ control: form.control, name: 'vin' });
  return (
    <section className="part job-part">
      <h2 className="part-title">Vehicle</h2>
      <SelectField
        label="Route"
        hint="The work and the engine that it is written for"
        emptyLabel="Choose a route"
        options={routes.map(({ id, name, engine }) => ({ value: id, label: `${name} (${engine.code})` }))}
        error={errors.route?.message}
        {...form.register('route', { required: 'Choose the route.' })}
      />
      {route !== undefined && route.options.length > 0 && (
        <div className="form-pair">
          {route.options.map((option) => (
            <SelectField
              key={option.id}
              label={option.ask}
              emptyLabel="Choose"
              options={option.choices.map(({ id, label }) => ({ value: id, label }))}
              error={errors.options?.[option.id]?.message}
              {...form.register(`options.${option.id}`, { required: 'Look at the vehicle and choose.' })}
            />
          ))}
        </div>
      )}
      <div className="form-pair">
        <TextField
          label="Registration"
          isFigure
          autoCapitalize="characters"
          error={errors.registration?.message}
          {...form.register('registration', {
            required: NEEDED,
            maxLength: { value: 20, message: 'At most 20 characters.' },
          })}
        />
        <TextField
          label="VIN"
          isFigure
          isOptional
          autoCapitalize="characters"
          hint={vinWords(vin)}
          error={errors.vin?.message}
          {...form.register('vin', {
            validate: (text) =>
              text.trim() === '' ||
              checkVin(text).wellFormed ||
              'A VIN has 17 characters, digits and letters without I, O and Q.',
          })}
        />
      </div>
      <div className="job-odometer">
        <TextField
          label="Odometer"
          isFigure
          inputMode="numeric"
          error={errors.odometer?.message}
          {...form.register('odometer', {
            required: NEEDED,
            pattern: { value: /^\d{1,7}([.,]\d)?$/, message: 'Digits only, as the dial shows it.' },
          })}
        />
        <SelectField
          label="Unit"
          options={[
            { value: 'km', label: 'km' },
            { value: 'mi', label: 'miles' },
          ]}
          {...form.register('odometerUnit')}
        />
      </div>
    </section>
  );
}

/** A wrong check digit is a warning only: many markets ask for none. */
function vinWords(vin: string): string | undefined {
  const { wellFormed, checkDigit } = checkVin(vin);
  if (!wellFormed || !checkDigit) return undefined;
  return checkDigit.ok
    ? 'The check digit fits.'
    : `The check digit would be ${checkDigit.expected}. Look again; not every market uses it.`;
}

/** Who the customer is, and the complaint in their words. */
export function CustomerFields({ form }: FieldsetProps) {
  const { errors } = form.formState;
  return (
    <section className="part job-part">
      <h2 className="part-title">Customer</h2>
      <div className="form-pair">
        <TextField
          label="Name"
          autoComplete="off"
          error={errors.customerName?.message}
          {...form.register('customerName', { required: NEEDED })}
        />
        <TextField
          label="E-mail"
          type="email"
          autoComplete="off"
          error={errors.customerEmail?.message}
          {...form.register('customerEmail', {
            required: NEEDED,
            pattern: {
              value: /^[^\s@]+@[^\s@]+\.[^\s@]+$/,
              message: 'An e-mail address, such as name@example.org.',
            },
          })}
        />
      </div>
      <div className="form-pair">
        <TextField
          label="Telephone"
          type="tel"
          autoComplete="off"
          isOptional
          {...form.register('customerPhone')}
        />
        <TextField
          label="May approve extra work"
          hint="Who, and how to reach them"
          error={errors.approver?.message}
          {...form.register('approver', { required: 'Name who may, or write “nobody”.' })}
        />
      </div>
      <TextArea
        label="Complaint, in the customer’s words"
        isOptional
        rows={3}
        {...form.register('complaint')}
      />
    </section>
  );
}

/** What becomes of the old parts, when it is promised, and what else the workshop should know. */
export function AgreementFields({ form }: FieldsetProps) {
  const { errors } = form.formState;
  // The browser shows a date as its own language has it; the words beside it can't be misread.
  const promisedOn = useWatch({ control: form.control, name: 'promisedOn' });
  return (
    <section className="part job-part">
      <h2 className="part-title">Agreement</h2>
      <TextField
        label="What becomes of the old parts"
        error={errors.oldParts?.message}
        {...form.register('oldParts', { required: NEEDED })}
      />
      <div className="job-date">
        <DateField
          label="Promised for"
          isOptional
          hint={promisedOn === '' ? undefined : dayOf(`${promisedOn}T12:00:00Z`, 'UTC')}
          {...form.register('promisedOn')}
        />
      </div>
      <TextArea
        label="Note"
        hint="It goes into the record and stays there: no names, no contact data."
        isOptional
        rows={2}
        {...form.register('note')}
      />
    </section>
  );
}

/** Who is put on the job; their tablets keep it offline. */
export function PeopleFields({ form, people }: FieldsetProps) {
  return (
    <section className="part job-part">
      <h2 className="part-title">Who works on it</h2>
      <div className="job-choices">
        {people.map(({ id, name, roles }) => (
          <Checkbox key={id} label={`${name}, ${roles.join(', ')}`} value={id} {...form.register('people')} />
        ))}
      </div>
    </section>
  );
}
