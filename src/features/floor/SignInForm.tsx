import { useState } from 'react';
import { QuietButton } from '@/components/QuietButton';
import { MainAction } from '@/components/MainAction';

export interface SignInFormProps {
  isOnline: boolean;
  isBusy: boolean;
  onSignIn: (given: { email: string; password: string }) => void;
  onCancel?: (() => void) | undefined;
}

/** Signs one more person in at this tablet; the others stay. */
export function SignInForm({ isOnline, isBusy, onSignIn, onCancel }: SignInFormProps) {
  const [email, setEmail] = useState('');
  const [password, setPassword] = useState('');
  const why = !isOnline
    ? 'needs the network once'
    : email.trim() === '' || password === ''
      ? 'fill in both'
      : undefined;
  return (
    <form
      className="grid max-w-2xl gap-5"
      onSubmit={(event) => {
        event.preventDefault();
        if (why === undefined && !isBusy) onSignIn({ email: email.trim(), password });
      }}
    >
      <h1 className="floor-step">Sign in on this tablet</h1>
      <p className="text-lg text-soft">
        Once, with a network. You stay signed in beside the others for longer than a shift, and you can work
        without a network from then on.
      </p>
      <BigField label="E-mail" type="email" autoComplete="username" value={email} onChange={setEmail} />
      <BigField
        label="Password"
        type="password"
        autoComplete="current-password"
        value={password}
        onChange={setPassword}
      />
      <div className="flex gap-3">
        {onCancel && <QuietButton label="Back" onPress={onCancel} />}
        <MainAction type="submit" label="Sign in" why={why} isBusy={isBusy} onPress={() => undefined} />
      </div>
    </form>
  );
}

interface BigFieldProps {
  label: string;
  type: 'email' | 'password' | 'text';
  autoComplete: string;
  value: string;
  onChange: (value: string) => void;
}

/** A text field a gloved finger finds. */
export function BigField({ label, type, autoComplete, value, onChange }: BigFieldProps) {
  return (
    <label className="grid gap-1">
      <span className="form-label">{label}</span>
      <input
        className="min-h-18 w-full rounded-md border-2 border-strong bg-sheet px-4 text-2xl"
        type={type}
        autoComplete={autoComplete}
        autoCapitalize="none"
        spellCheck={false}
        value={value}
        onChange={(event) => onChange(event.target.value)}
      />
    </label>
  );
}
