import { createEvent, fireEvent, render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it, vi } from 'vitest';
import { MainAction } from './MainAction';

describe('MainAction', () => {
  it('is pressed by finger, Enter and Space alike', async () => {
    const onPress = vi.fn();
    render(<MainAction label="Turned 110°" next="touch, pedal or space" onPress={onPress} />);
    await userEvent.click(screen.getByRole('button'));
    await userEvent.keyboard('{Enter} ');
    expect(onPress).toHaveBeenCalledTimes(3);
  });

  it('says why it is barred, stays reachable and does nothing', async () => {
    const onPress = vi.fn();
    render(<MainAction label="Keep" next="then rod 5" why="read the rear end first" onPress={onPress} />);
    const button = screen.getByRole('button', { name: 'Keep' });
    expect(button).toHaveAccessibleDescription('read the rear end first');
    await userEvent.click(button);
    expect(button).toHaveFocus();
    expect(onPress).not.toHaveBeenCalled();
  });

  it('takes no second press while the first is being kept', async () => {
    const onPress = vi.fn();
    render(<MainAction label="Keep" isBusy onPress={onPress} />);
    await userEvent.click(screen.getByRole('button'));
    expect(onPress).not.toHaveBeenCalled();
  });

  it('lets a key that is held down count once', () => {
    render(<MainAction label="Turned 110°" onPress={vi.fn()} />);
    const button = screen.getByRole('button');
    const again = createEvent.keyDown(button, { key: 'Enter', repeat: true });
    fireEvent(button, again);
    expect(again.defaultPrevented).toBe(true);
    const first = createEvent.keyDown(button, { key: 'Enter' });
    fireEvent(button, first);
    expect(first.defaultPrevented).toBe(false);
  });
});
