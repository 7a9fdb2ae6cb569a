import { act, fireEvent, render, screen } from '@testing-library/react';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { HoldButton } from './HoldButton';

beforeEach(() => {
  vi.useFakeTimers();
});
afterEach(() => {
  vi.useRealTimers();
});

const finger = { isPrimary: true, button: 0, pointerId: 1 };
const pass = (ms: number) =>
  act(() => {
    vi.advanceTimersByTime(ms);
  });

function renderHold(props: { why?: string } = {}) {
  const onHeld = vi.fn();
  render(<HoldButton label="Condemn bolt 4B" onHeld={onHeld} holdMs={1000} {...props} />);
  return { onHeld, button: screen.getByRole('button', { name: 'Condemn bolt 4B' }) };
}

describe('HoldButton', () => {
  it('acts once after being held, and not again while still held', () => {
    const { onHeld, button } = renderHold();
    fireEvent.pointerDown(button, finger);
    pass(999);
    expect(onHeld).not.toHaveBeenCalled();
    expect(button).toHaveTextContent('keep holding');
    pass(5000);
    expect(onHeld).toHaveBeenCalledOnce();
  });

  it('does nothing when let go early', () => {
    const { onHeld, button } = renderHold();
    fireEvent.pointerDown(button, finger);
    pass(900);
    fireEvent.pointerUp(button, finger);
    pass(5000);
    expect(onHeld).not.toHaveBeenCalled();
  });

  it('does nothing when the finger slides off', () => {
    const { onHeld, button } = renderHold();
    fireEvent.pointerDown(button, finger);
    fireEvent.pointerLeave(button, finger);
    pass(5000);
    expect(onHeld).not.toHaveBeenCalled();
  });

  it('pays no heed to a second finger', () => {
    const { onHeld, button } = renderHold();
    fireEvent.pointerDown(button, { ...finger, isPrimary: false });
    pass(5000);
    expect(onHeld).not.toHaveBeenCalled();
  });

  it.each(['Enter', ' '])('works by holding the key %j', (key) => {
    const { onHeld, button } = renderHold();
    fireEvent.keyDown(button, { key });
    fireEvent.keyDown(button, { key, repeat: true });
    pass(1000);
    expect(onHeld).toHaveBeenCalledOnce();
  });

  it('does nothing on a key that is only tapped', () => {
    const { onHeld, button } = renderHold();
    fireEvent.keyDown(button, { key: 'Enter' });
    fireEvent.keyUp(button, { key: 'Enter' });
    pass(5000);
    expect(onHeld).not.toHaveBeenCalled();
  });

  it('asks a screen reader, which can only press, to press twice', () => {
    const { onHeld, button } = renderHold();
    fireEvent.click(button, { detail: 0 });
    expect(onHeld).not.toHaveBeenCalled();
    expect(button).toHaveTextContent('press again to confirm');
    fireEvent.click(button, { detail: 0 });
    expect(onHeld).toHaveBeenCalledOnce();
  });

  it('forgets the first of two presses after a few seconds', () => {
    const { onHeld, button } = renderHold();
    fireEvent.click(button, { detail: 0 });
    pass(6000);
    fireEvent.click(button, { detail: 0 });
    expect(onHeld).not.toHaveBeenCalled();
  });

  it('says why it is barred and can then not be held', () => {
    const { onHeld, button } = renderHold({ why: 'the supervisor decides' });
    fireEvent.pointerDown(button, finger);
    pass(5000);
    fireEvent.click(button, { detail: 0 });
    fireEvent.click(button, { detail: 0 });
    expect(onHeld).not.toHaveBeenCalled();
    expect(button).toHaveAccessibleDescription('the supervisor decides');
    expect(button).toHaveAttribute('aria-disabled', 'true');
  });
});
