import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it, vi } from 'vitest';
import { answerDesk, refused, type DeskAnswer } from '../../../tests/support/desk-server';
import { PinForm } from './PinForm';

async function fill({
  pin = '280461',
  again = pin,
  answer,
}: {
  pin?: string;
  again?: string;
  answer?: DeskAnswer;
}) {
  const onSet = vi.fn();
  const server = answerDesk(answer === undefined ? {} : { 'POST /api/pins': answer });
  render(<PinForm hasPin onSet={onSet} />);
  const user = userEvent.setup();
  await user.type(screen.getByLabelText('New PIN'), pin);
  await user.type(screen.getByLabelText('The same again'), again);
  await user.type(screen.getByLabelText('Your password'), 'three plain words');
  await user.click(screen.getByRole('button', { name: 'Set the PIN' }));
  return { ...server, onSet };
}

describe('the form that sets a signing PIN', () => {
  it('sends PIN and password, says that it is set, and forgets both', async () => {
    const { requests, onSet } = await fill({ answer: { body: { ok: true } } });
    expect(await screen.findByText('Your PIN is set')).toBeVisible();
    expect(requests.map(({ body }) => body)).toEqual([{ pin: '280461', password: 'three plain words' }]);
    expect(onSet).toHaveBeenCalledOnce();
    expect(screen.getByLabelText('New PIN')).toHaveValue('');
    expect(screen.getByLabelText('Your password')).toHaveValue('');
  });

  it.each(['28046', '2804617', '28o461'])('does not send %s, which is not six digits', async (pin) => {
    const { requests } = await fill({ pin });
    expect(await screen.findByText('Six digits.')).toBeVisible();
    expect(requests).toEqual([]);
  });

  it('does not send two that do not agree', async () => {
    const { requests } = await fill({ again: '280462' });
    expect(await screen.findByText('The two do not agree. Type it again.')).toBeVisible();
    expect(requests).toEqual([]);
  });

  it('puts the server’s word about the password at the password', async () => {
    const { onSet } = await fill({ answer: refused(403, 'That is not your password.', 'password') });
    expect(await screen.findByText('That is not your password.')).toBeVisible();
    expect(screen.getByLabelText('Your password')).toHaveAccessibleDescription('That is not your password.');
    expect(onSet).not.toHaveBeenCalled();
  });

  it('keeps what was typed when the network is away', async () => {
    await fill({});
    expect(await screen.findByRole('alert')).toHaveTextContent('What you typed is still here');
    expect(screen.getByLabelText('New PIN')).toHaveValue('280461');
  });

  it('shows no digit of the PIN', () => {
    render(<PinForm hasPin={false} onSet={vi.fn()} />);
    expect(screen.getByLabelText('PIN')).toHaveAttribute('type', 'password');
  });
});
