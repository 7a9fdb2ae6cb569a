import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { beforeEach, describe, expect, it, vi } from 'vitest';
import { SetPasswordForm } from './SetPasswordForm';

const fetched = vi.fn<typeof fetch>();

beforeEach(() => {
  fetched.mockReset();
  vi.stubGlobal('fetch', fetched);
});

async function fill(password: string, again = password) {
  render(<SetPasswordForm token="the-token" />);
  const user = userEvent.setup();
  await user.type(screen.getByLabelText('New password'), password);
  await user.type(screen.getByLabelText('The same again'), again);
  await user.click(screen.getByRole('button', { name: 'Set the password' }));
}

describe('the form that sets a password', () => {
  it('sends the token and the password, and then leads to the sign-in', async () => {
    fetched.mockResolvedValue(Response.json({ ok: true }));
    await fill('three plain words');
    expect(await screen.findByRole('link', { name: 'Sign in' })).toHaveAttribute('href', '/sign-in');
    expect(fetched).toHaveBeenCalledOnce();
    const [path, init] = fetched.mock.calls[0]!;
    expect(path).toBe('/api/set-password');
    expect(JSON.parse(init?.body as string)).toEqual({ token: 'the-token', password: 'three plain words' });
  });

  it('asks the server nothing while the two do not agree or are too short', async () => {
    await fill('too short', 'not the same');
    expect(await screen.findByText('Ten characters at least. Add some more.')).toBeVisible();
    expect(screen.getByText('The two do not agree. Type it again.')).toBeVisible();
    expect(fetched).not.toHaveBeenCalled();
  });

  it('puts the server’s word about a field at that field', async () => {
    const error = {
      code: 'invalid-field',
      message: 'password: is on a list of bad ones.',
      field: 'password',
    };
    fetched.mockResolvedValue(Response.json({ error }, { status: 400 }));
    await fill('three plain words');
    expect(await screen.findByText(error.message)).toBeVisible();
    expect(screen.getByLabelText('New password')).toHaveAccessibleDescription(/list of bad ones/);
  });

  it('says above the form what belongs to no field, and keeps what was typed', async () => {
    fetched.mockRejectedValue(new TypeError('network'));
    await fill('three plain words');
    expect(await screen.findByRole('alert')).toHaveTextContent('The server was not reached.');
    expect(screen.getByLabelText('New password')).toHaveValue('three plain words');
  });
});
