import { useState } from 'react';
import * as z from 'zod/mini';
import { Button } from '@/components/Button';
import { ButtonLink } from '@/components/ButtonLink';
import { Notice } from '@/components/Notice';
import { TextField } from '@/components/TextField';
import { FormTrouble } from './FormTrouble';
import { prepareTablet } from '@/offline/prepare-tablet';
import { usePostedForm } from './use-posted-form';

const signedIn = z.object({ personId: z.string(), name: z.string() });

interface Fields {
  email: string;
  password: string;
}

export interface SignInFormProps {
  /** The page of this site to go to after. */
  next: string;
  /** Names of those who are signed in at this browser already. */
  beside: string[];
}

/** Signs a person in, beside whoever is, and makes this browser ready to record for them. */
export function SignInForm({ next, beside }: SignInFormProps) {
  const [notReady, setNotReady] = useState<string>();
  const { register, send, trouble, isSubmitting, errorOf } = usePostedForm<Fields, typeof signedIn>({
    path: '/api/auth/sign-in',
    answer: signedIn,
    defaults: { email: '', password: '' },
    toBody: ({ email, password }) => ({ email: email.trim(), password }),
    onDone: async ({ personId, name }) => {
      const outcome = await prepareTablet({ id: personId, name });
      if (outcome.ok) window.location.assign(next);
      else setNotReady(outcome.why);
    },
  });
  if (notReady !== undefined) {
    return (
      <Notice tone="unsure" title="Signed in, but this browser cannot record yet" isAlert>
        <p>{notReady}</p>
        <p>You can read everything. To record work here, sign in once more while there is a network.</p>
        <ButtonLink href={next}>Go on</ButtonLink>
      </Notice>
    );
  }
  return (
    <form className="form" method="post" noValidate onSubmit={(event) => void send(event)}>
      {beside.length > 0 && (
        <Notice title={`Signed in here: ${beside.join(', ')}`}>
          <p>Whoever signs in now joins them. Nobody is signed out.</p>
        </Notice>
      )}
      <FormTrouble message={trouble} />
      <TextField
        label="E-mail address"
        type="email"
        autoComplete="username"
        error={errorOf('email')}
        {...register('email', { required: 'Type your e-mail address.' })}
      />
      <TextField
        label="Password"
        type="password"
        autoComplete="current-password"
        error={errorOf('password')}
        {...register('password', { required: 'Type your password.' })}
      />
      <div className="form-actions">
        <Button look="main" type="submit" isBusy={isSubmitting}>
          Sign in
        </Button>
      </div>
    </form>
  );
}
