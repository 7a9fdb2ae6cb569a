import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { useState } from 'react';
import { describe, expect, it, vi } from 'vitest';
import { PinPad } from './PinPad';

function PinPadWithState({
  onValue = vi.fn(),
  error,
}: {
  onValue?: (value: string) => void;
  error?: string;
}) {
  const [value, setValue] = useState('');
  return (
    <PinPad
      label="PIN of Mira Solvang"
      value={value}
      error={error}
      onChange={(next) => {
        setValue(next);
        onValue(next);
      }}
    />
  );
}

describe('PinPad', () => {
  it('takes digits and shows how many, never which', async () => {
    const onValue = vi.fn();
    const { container } = render(<PinPadWithState onValue={onValue} />);
    for (const digit of ['4', '9', '0', '3'])
      await userEvent.click(screen.getByRole('button', { name: digit }));
    expect(onValue).toHaveBeenLastCalledWith('4903');
    expect(container.querySelectorAll('[data-filled]')).toHaveLength(4);
    expect(screen.getByLabelText('PIN of Mira Solvang')).toHaveAttribute('type', 'password');
    expect(container).not.toHaveTextContent('4903');
  });

  it('leaves out what is no digit', async () => {
    const onValue = vi.fn();
    render(<PinPadWithState onValue={onValue} />);
    await userEvent.type(screen.getByLabelText('PIN of Mira Solvang'), '1a2 3');
    expect(onValue).toHaveBeenLastCalledWith('123');
  });

  it('erases one digit or all', async () => {
    const onValue = vi.fn();
    render(<PinPadWithState onValue={onValue} />);
    await userEvent.type(screen.getByLabelText('PIN of Mira Solvang'), '1234');
    await userEvent.click(screen.getByRole('button', { name: 'erase the last digit' }));
    expect(onValue).toHaveBeenLastCalledWith('123');
    await userEvent.click(screen.getByRole('button', { name: 'clear' }));
    expect(onValue).toHaveBeenLastCalledWith('');
  });

  it('never asks the browser to keep the PIN', () => {
    render(<PinPadWithState />);
    expect(screen.getByLabelText('PIN of Mira Solvang')).toHaveAttribute('autocomplete', 'off');
  });

  it('says an error at once', () => {
    render(<PinPadWithState error="The two PINs differ. Nothing is signed yet: enter it again." />);
    expect(screen.getByRole('alert')).toHaveTextContent('The two PINs differ.');
  });
});
