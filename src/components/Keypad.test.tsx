import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { useState } from 'react';
import { describe, expect, it, vi } from 'vitest';
import { Keypad, type KeypadProps } from './Keypad';

function KeypadWithState({
  onValue = vi.fn(),
  start = '',
  ...props
}: Partial<KeypadProps> & { onValue?: (value: string) => void; start?: string }) {
  const [value, setValue] = useState(start);
  return (
    <Keypad
      label="Crushed width"
      unit="mm"
      {...props}
      value={value}
      onChange={(next) => {
        setValue(next);
        onValue(next);
      }}
    />
  );
}

const key = (name: string) => screen.getByRole('button', { name });

describe('Keypad', () => {
  it('writes a decimal number key by key', async () => {
    render(<KeypadWithState />);
    for (const name of ['0', 'decimal point', '0', '4', '6']) await userEvent.click(key(name));
    expect(screen.getByLabelText('Crushed width')).toHaveValue('0.046');
  });

  it('erases the last digit only', async () => {
    render(<KeypadWithState start="0.046" />);
    await userEvent.click(key('erase the last digit'));
    expect(screen.getByLabelText('Crushed width')).toHaveValue('0.04');
  });

  it('shows a comma where the shop writes one, and hands on a point', async () => {
    const onValue = vi.fn();
    render(<KeypadWithState separator="," onValue={onValue} />);
    for (const name of ['1', 'decimal comma', '5']) await userEvent.click(key(name));
    expect(screen.getByLabelText('Crushed width')).toHaveValue('1,5');
    expect(onValue).toHaveBeenLastCalledWith('1.5');
  });

  it('understands both signs from a keyboard and leaves letters out', async () => {
    const onValue = vi.fn();
    render(<KeypadWithState onValue={onValue} />);
    await userEvent.type(screen.getByLabelText('Crushed width'), '0,0x46');
    expect(onValue).toHaveBeenLastCalledWith('0.046');
  });

  it('has no decimal key for whole numbers', () => {
    render(<KeypadWithState kind="integer" />);
    expect(screen.queryByRole('button', { name: /decimal/ })).toBeNull();
  });

  it('tells the unit, and an error at once, to whoever hears the field', () => {
    render(<KeypadWithState error="The card ends at 0.175 mm." />);
    expect(screen.getByLabelText('Crushed width')).toHaveAccessibleDescription(
      'mm The card ends at 0.175 mm.',
    );
    expect(screen.getByLabelText('Crushed width')).toBeInvalid();
    expect(screen.getByRole('alert')).toHaveTextContent('The card ends at 0.175 mm.');
  });

  it('hands Enter on to the screen', async () => {
    const onEnter = vi.fn();
    render(<KeypadWithState start="2" onEnter={onEnter} />);
    await userEvent.type(screen.getByLabelText('Crushed width'), '{Enter}');
    expect(onEnter).toHaveBeenCalledOnce();
  });
});
