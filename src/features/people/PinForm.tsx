import { useState } from 'react';
import { Button } from '@/components/Button';
import { Notice } from '@/components/Notice';
import { TextField } from '@/components/TextField';
import { FormTrouble } from './FormTrouble';
import { done, usePostedForm } from './use-posted-form';

interface Fields {
  pin: string;
  again: string;
  password: string;
}

/** Sets one's own signing PIN; it needs the password, so that an open screen is not enough. */
export function PinForm({ hasPin, onSet }: { hasPin: boolean; onSet: () => void }) {
  const [isSet, setIsSet] = useState(false);
  const { register, send, trouble, isSubmitting, errorOf, reset } = usePostedForm<Fields, typeof done>({
    path: '/api/pins',
    answer: done,
    defaults: { pin: '', again: '', password: '' },
    toBody: ({ pin, password }) => ({ pin, password }),
    onDone: () => {
      reset();
      setIsSet(true);
      onSet();
    },
  });
  return (
    <form className="form" method="post" noValidate onSubmit={(event) => void send(event)}>
      {isSet && (
        <Notice tone="good" title="Your PIN is set" isAlert>
          <p>From now on it stands behind your signatures.</p>
        </Notice>
      )}
      <FormTrouble message={trouble} />
      <div className="form-pair">
        <TextField
          label={hasPin ? 'New PIN' : 'PIN'}
          type="password"
          inputMode="numeric"
          autoComplete="off"
          isFigure
          error={errorOf('pin')}
          {...register('pin', {
            pattern: { value: /^\d{6}$/, message: 'Six digits.' },
            required: 'Six digits.',
          })}
        />
        <TextField
          label="The same again"
          type="password"
          inputMode="numeric"
          autoComplete="off"
          isFigure
          error={errorOf('again')}
          {...register('again', {
            validate: (again, { pin }) => again === pin || 'The two do not agree. Type it again.',
          })}
        />
      </div>
      <TextField
        label="Your password"
        type="password"
        autoComplete="current-password"
        error={errorOf('password')}
        {...register('password', { required: 'Type your password.' })}
      />
      <div className="form-actions">
        <Button look="main" type="submit" isBusy={isSubmitting}>
          Set the PIN
        </Button>
      </div>
    </form>
  );
}
