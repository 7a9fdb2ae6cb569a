import { useState } from 'react';
import { Button } from '@/components/Button';
import { ButtonLink } from '@/components/ButtonLink';
import { Notice } from '@/components/Notice';
import { SelectField } from '@/components/SelectField';
import { TextField } from '@/components/TextField';
import { FormTrouble } from './FormTrouble';
import { NEW_PASSWORD, PASSWORD_HINT } from './password-rules';
import { done, usePostedForm } from './use-posted-form';

interface Fields {
  name: string;
  email: string;
  password: string;
  workshop: string;
  zone: string;
}

export interface FirstOwnerFormProps {
  token: string;
  /** The time zones that the server knows. */
  zones: string[];
  /** The zone chosen to begin with. */
  zone: string;
}

/** Makes the first owner and names the workshop. */
export function FirstOwnerForm({ token, zones, zone }: FirstOwnerFormProps) {
  const [isMade, setIsMade] = useState(false);
  const { register, send, trouble, isSubmitting, errorOf } = usePostedForm<Fields, typeof done>({
    path: '/api/first-owner',
    answer: done,
    defaults: { name: '', email: '', password: '', workshop: '', zone },
    toBody: (fields) => ({
      token,
      name: fields.name,
      email: fields.email.trim(),
      password: fields.password,
      workshop: { name: fields.workshop, zone: fields.zone },
    }),
    onDone: () => setIsMade(true),
  });
  if (isMade) {
    return (
      <Notice tone="good" title="The workshop is set up" isAlert>
        <p>The link is used up. Sign in, then add the others under People.</p>
        <ButtonLink look="main" href="/sign-in?next=/people">
          Sign in
        </ButtonLink>
      </Notice>
    );
  }
  return (
    <form className="form" method="post" noValidate onSubmit={(event) => void send(event)}>
      <FormTrouble message={trouble} />
      <TextField
        label="Name of the workshop"
        autoComplete="organization"
        error={errorOf('workshop')}
        {...register('workshop', { required: 'Type the name of the workshop.' })}
      />
      <SelectField
        label="Time zone of the workshop"
        hint="Times are shown and due dates are judged in it."
        options={zones.map((name) => ({ value: name, label: name.replaceAll('_', ' ') }))}
        error={errorOf('zone')}
        {...register('zone')}
      />
      <TextField
        label="Your name as it is printed beside what you sign"
        hint="It stays as it is once you have signed."
        autoComplete="name"
        error={errorOf('name')}
        {...register('name', { required: 'Type your name.' })}
      />
      <TextField
        label="Your e-mail address"
        type="email"
        autoComplete="username"
        error={errorOf('email')}
        {...register('email', { required: 'Type your e-mail address.' })}
      />
      <TextField
        label="Your password"
        type="password"
        autoComplete="new-password"
        hint={PASSWORD_HINT}
        error={errorOf('password')}
        {...register('password', NEW_PASSWORD)}
      />
      <div className="form-actions">
        <Button look="main" type="submit" isBusy={isSubmitting}>
          Set up the workshop
        </Button>
      </div>
    </form>
  );
}
