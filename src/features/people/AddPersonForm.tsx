import * as z from 'zod/mini';
import { Button } from '@/components/Button';
import { Checkbox } from '@/components/Checkbox';
import { TextField } from '@/components/TextField';
import { FormTrouble } from './FormTrouble';
import type { GivenLink } from './people-answer';
import { ROLE_CHOICES } from './roles';
import { usePostedForm } from './use-posted-form';

const added = z.object({ person: z.object({ name: z.string() }), link: z.string(), expiresAt: z.string() });

interface Fields {
  name: string;
  email: string;
  roles: string[];
}

/** Adds a person. The name is as it will be printed, and can't be changed once they have signed. */
export function AddPersonForm({ onAdded }: { onAdded: (link: GivenLink) => void }) {
  const { register, send, trouble, isSubmitting, errorOf, reset } = usePostedForm<Fields, typeof added>({
    path: '/api/people',
    answer: added,
    defaults: { name: '', email: '', roles: ['technician'] },
    toBody: ({ name, email, roles }) => ({ name: name.trim(), email: email.trim(), roles }),
    onDone: ({ person, link, expiresAt }) => {
      reset();
      onAdded({ name: person.name, link, expiresAt });
    },
  });
  return (
    <form className="form" noValidate onSubmit={(event) => void send(event)}>
      <FormTrouble message={trouble} />
      <div className="form-pair">
        <TextField
          label="Printed name"
          hint="As it stands under a signature; it stays once they have signed."
          autoComplete="off"
          error={errorOf('name')}
          {...register('name', { required: 'Type the name.' })}
        />
        <TextField
          label="E-mail address"
          type="email"
          autoComplete="off"
          error={errorOf('email')}
          {...register('email', { required: 'Type the e-mail address.' })}
        />
      </div>
      {ROLE_CHOICES.map(({ role, does }) => (
        <Checkbox
          key={role}
          label={role}
          hint={does}
          value={role}
          {...register('roles', { validate: (roles) => roles.length > 0 || 'Choose one role at least.' })}
        />
      ))}
      {errorOf('roles') !== undefined && (
        <p role="alert" className="form-error">
          {errorOf('roles')}
        </p>
      )}
      <div className="form-actions">
        <Button look="main" type="submit" isBusy={isSubmitting}>
          Add the person
        </Button>
      </div>
    </form>
  );
}
