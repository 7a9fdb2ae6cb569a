import { useState } from 'react';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import { BigField } from './SignInForm';

const NAMES = ['Bay 1', 'Bay 2', 'Bay 3', 'Trolley', 'Office'];

export interface TabletFormProps {
  isBusy: boolean;
  /** The workshop no longer knows this tablet. */
  mustAgain: boolean;
  onName: (name: string) => void;
}

/** Gives this tablet its name in the workshop; from then on it can send what is recorded on it. */
export function TabletForm({ isBusy, mustAgain, onName }: TabletFormProps) {
  const [name, setName] = useState('');
  return (
    <section className="grid max-w-3xl gap-5">
      <h1 className="floor-step">{mustAgain ? 'Enrol this tablet again' : 'Name this tablet'}</h1>
      <p className="text-lg text-soft">
        {mustAgain
          ? 'The workshop no longer knows this tablet. What was recorded on it is safe and is sent after it is enrolled again.'
          : 'Once. The record says on which tablet each entry was made.'}
      </p>
      <div className="flex flex-wrap gap-3">
        {NAMES.map((each) => (
          <QuietButton
            key={each}
            shape="wide"
            label={each}
            isPressed={name === each}
            onPress={() => setName(each)}
          />
        ))}
      </div>
      <BigField
        label="Name of this tablet"
        type="text"
        autoComplete="off"
        value={name}
        onChange={(value) => setName(value.slice(0, 60))}
      />
      <div className="flex">
        <MainAction
          label="Enrol the tablet"
          why={name.trim() === '' ? 'give it a name' : undefined}
          isBusy={isBusy}
          onPress={() => onName(name.trim())}
        />
      </div>
    </section>
  );
}
