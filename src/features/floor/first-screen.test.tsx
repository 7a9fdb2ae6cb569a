import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { useState } from 'react';
import { describe, expect, it, vi } from 'vitest';
import type { JobRow } from '@/offline/database';
import { JobRows } from './JobRows';
import { NoteField } from './NoteField';
import { SignInForm } from './SignInForm';
import { TabletForm } from './TabletForm';

describe('signing in on a tablet', () => {
  it('wants both fields, and hands them on without the spaces around the address', async () => {
    const onSignIn = vi.fn();
    render(<SignInForm isOnline isBusy={false} onSignIn={onSignIn} />);
    const user = userEvent.setup();
    const main = screen.getByRole('button', { name: 'Sign in' });
    expect(main).toHaveAccessibleDescription('fill in both');
    await user.type(screen.getByLabelText('E-mail'), ' tech@workshop.example ');
    await user.type(screen.getByLabelText('Password'), 'bearing-day{Enter}');
    expect(onSignIn).toHaveBeenCalledExactlyOnceWith({
      email: 'tech@workshop.example',
      password: 'bearing-day',
    });
  });

  it('says that it needs the network, and signs nobody in without', async () => {
    const onSignIn = vi.fn();
    render(<SignInForm isOnline={false} isBusy={false} onSignIn={onSignIn} />);
    const user = userEvent.setup();
    await user.type(screen.getByLabelText('E-mail'), 'tech@workshop.example');
    await user.type(screen.getByLabelText('Password'), 'bearing-day{Enter}');
    expect(screen.getByRole('button', { name: 'Sign in' })).toHaveAccessibleDescription(
      'needs the network once',
    );
    expect(onSignIn).not.toHaveBeenCalled();
  });
});

describe('naming a tablet', () => {
  it('takes a name that is touched', async () => {
    const onName = vi.fn();
    render(<TabletForm isBusy={false} mustAgain={false} onName={onName} />);
    const user = userEvent.setup();
    const main = screen.getByRole('button', { name: 'Enrol the tablet' });
    expect(main).toHaveAccessibleDescription('give it a name');
    await user.click(screen.getByRole('button', { name: 'Trolley' }));
    await user.click(main);
    expect(onName).toHaveBeenCalledExactlyOnceWith('Trolley');
  });

  it('says that nothing is lost where the workshop no longer knows the tablet', () => {
    render(<TabletForm isBusy={false} mustAgain onName={vi.fn()} />);
    expect(screen.getByRole('heading', { name: 'Enrol this tablet again' })).toBeVisible();
    expect(screen.getByText(/What was recorded on it is safe and is sent after/)).toBeVisible();
  });
});

describe('the jobs of a tablet', () => {
  const row: JobRow = {
    id: 'j1',
    number: '26-007',
    label: 'j',
    engine: 'Testwell T4',
    registration: 'MX 41 KLO',
    plan: 'p',
    phase: 'running',
    people: ['tech'],
    promisedOn: '2026-06-05',
    head: { seq: 1, hash: 'h' },
    have: null,
    availableOffline: true,
    revision: 0,
  };

  function show(jobs: JobRow[], isOnline: boolean, refused = new Map<string, number>()) {
    const onOpen = vi.fn();
    const onKeep = vi.fn();
    render(
      <JobRows
        jobs={jobs}
        working="tech"
        isOnline={isOnline}
        refused={refused}
        onOpen={onOpen}
        onKeep={onKeep}
      />,
    );
    return {
      onOpen,
      onKeep,
      user: userEvent.setup(),
      job: screen.getByRole('button', { name: /^Job 26-007/ }),
    };
  }

  it('say whose they are, when they are promised, and that they work offline', async () => {
    const { job, user, onOpen } = show([row], false);
    expect(job).toHaveTextContent('MX 41 KLO · running · promised 5 Jun 2026 · yours');
    expect(job).toHaveTextContent('works offline');
    await user.click(job);
    expect(onOpen).toHaveBeenCalledWith('j1');
  });

  it('can’t be opened without a network where they are not on the tablet, and say so', async () => {
    const { job, user, onOpen, onKeep } = show([{ ...row, availableOffline: false }], false);
    expect(job).toHaveTextContent('not on this tablet');
    await user.click(job);
    expect(onOpen).not.toHaveBeenCalled();
    const keep = screen.getByRole('button', { name: 'Make available offline' });
    expect(keep).toHaveAccessibleDescription('no network');
    await user.click(keep);
    expect(onKeep).not.toHaveBeenCalled();
  });

  it('are brought onto the tablet with a network', async () => {
    const { user, onKeep } = show([{ ...row, availableOffline: false }], true);
    await user.click(screen.getByRole('button', { name: 'Make available offline' }));
    expect(onKeep).toHaveBeenCalledWith('j1');
  });

  it('say that something of theirs was refused', () => {
    const { job } = show([row], true, new Map([['j1', 2]]));
    expect(job).toHaveTextContent('2 refused: open it to see why');
  });

  it('say why nothing more can be recorded on them', () => {
    const { job } = show(
      [{ ...row, stopped: { code: 'chain-broken', words: 'Tell the supervisor.' } }],
      true,
    );
    expect(job).toHaveTextContent('Tell the supervisor.');
  });
});

describe('words of one’s own', () => {
  function Note({ phrases }: { phrases: string[] }) {
    const [value, setValue] = useState('');
    return <NoteField label="Reason" phrases={phrases} value={value} onChange={setValue} />;
  }

  it('are picked one after the other, and typed on to', async () => {
    render(<Note phrases={['dirt inside', 'part missing']} />);
    const user = userEvent.setup();
    await user.click(screen.getByRole('button', { name: 'dirt inside' }));
    await user.click(screen.getByRole('button', { name: 'part missing' }));
    const field = screen.getByRole('textbox', { name: 'Reason' });
    await user.type(field, ' at rod 2');
    expect(field).toHaveValue('dirt inside, part missing at rod 2');
    expect(screen.getByText(/Leave out names, registrations and telephone numbers/)).toBeVisible();
  });
});
