import { useState } from 'react';
import { Button } from '@/components/Button';
import { Notice } from '@/components/Notice';
import { TextField } from '@/components/TextField';
import { FormTrouble } from './FormTrouble';
import { NEW_PASSWORD, PASSWORD_HINT } from './password-rules';
import { done, usePostedForm } from './use-posted-form';

interface Fields {
  current: string;
  next: string;
}

/** Changes one's own password; sessions elsewhere end, this one stays. */
export function ChangePasswordForm() {
  const [isChanged, setIsChanged] = useState(false);
  const { register, send, trouble, isSubmitting, errorOf, reset } = usePostedForm<Fields, typeof done>({
    path: '/api/me/password',
    answer: done,
    defaults: { current: '', next: '' },
    toBody: (fields) => fields,
    onDone: () => {
      reset();
      setIsChanged(true);
    },
  });
  return (
    <form className="form" method="post" noValidate onSubmit={(event) => void send(event)}>
      {isChanged && (
        <Notice tone="good" title="Your password is changed" isAlert>
          <p>
            Your sessions on other devices have ended. What is recorded there still arrives under your name.
          </p>
        </Notice>
      )}
      <FormTrouble message={trouble} />
      <div className="form-pair">
        <TextField
          label="Your password now"
          type="password"
          autoComplete="current-password"
          error={errorOf('current')}
          {...register('current', { required: 'Type your password.' })}
        />
        <TextField
          label="New password"
          type="password"
          autoComplete="new-password"
          hint={PASSWORD_HINT}
          error={errorOf('next')}
          {...register('next', NEW_PASSWORD)}
        />
      </div>
      <div className="form-actions">
        <Button look="main" type="submit" isBusy={isSubmitting}>
          Change the password
        </Button>
      </div>
    </form>
  );
}
