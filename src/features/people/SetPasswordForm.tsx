import { useState } from 'react';
import { Button } from '@/components/Button';
import { ButtonLink } from '@/components/ButtonLink';
import { Notice } from '@/components/Notice';
import { TextField } from '@/components/TextField';
import { FormTrouble } from './FormTrouble';
import { NEW_PASSWORD, PASSWORD_HINT } from './password-rules';
import { done, usePostedForm } from './use-posted-form';

interface Fields {
  password: string;
  again: string;
}

/** Sets a person's password through the one-time link that the owner gave them. */
export function SetPasswordForm({ token }: { token: string }) {
  const [isSet, setIsSet] = useState(false);
  const { register, send, trouble, isSubmitting, errorOf } = usePostedForm<Fields, typeof done>({
    path: '/api/set-password',
    answer: done,
    defaults: { password: '', again: '' },
    toBody: ({ password }) => ({ token, password }),
    onDone: () => setIsSet(true),
  });
  if (isSet) {
    return (
      <Notice tone="good" title="Your password is set" isAlert>
        <p>The link is used up. From now on, sign in with your e-mail address and this password.</p>
        <ButtonLink look="main" href="/sign-in">
          Sign in
        </ButtonLink>
      </Notice>
    );
  }
  return (
    <form className="form" method="post" noValidate onSubmit={(event) => void send(event)}>
      <FormTrouble message={trouble} />
      <TextField
        label="New password"
        type="password"
        autoComplete="new-password"
        hint={PASSWORD_HINT}
        error={errorOf('password')}
        {...register('password', NEW_PASSWORD)}
      />
      <TextField
        label="The same again"
        type="password"
        autoComplete="new-password"
        error={errorOf('again')}
        {...register('again', {
          validate: (again, { password }) => again === password || 'The two do not agree. Type it again.',
        })}
      />
      <div className="form-actions">
        <Button look="main" type="submit" isBusy={isSubmitting}>
          Set the password
        </Button>
      </div>
    </form>
  );
}
