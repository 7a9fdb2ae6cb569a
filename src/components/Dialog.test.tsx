import { createEvent, fireEvent, render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it, vi } from 'vitest';
import { Dialog } from './Dialog';

describe('Dialog', () => {
  it('shows nothing until it is open', () => {
    const { rerender } = render(
      <Dialog title="Was it turned?" isOpen={false} onClose={vi.fn()}>
        4B, 110°
      </Dialog>,
    );
    expect(screen.queryByText('4B, 110°')).toBeNull();
    rerender(
      <Dialog title="Was it turned?" isOpen onClose={vi.fn()}>
        4B, 110°
      </Dialog>,
    );
    expect(screen.getByRole('dialog', { name: 'Was it turned?' })).toHaveTextContent('4B, 110°');
  });

  it('asks to be closed by its button', async () => {
    const onClose = vi.fn();
    render(<Dialog title="Steps" isOpen onClose={onClose} children="list" />);
    await userEvent.click(screen.getByRole('button', { name: 'Close' }));
    expect(onClose).toHaveBeenCalledOnce();
  });

  it('asks to be closed by Escape and leaves the closing to its owner', () => {
    const onClose = vi.fn();
    render(<Dialog title="Steps" isOpen onClose={onClose} children="list" />);
    const dialog = screen.getByRole('dialog');
    const cancel = createEvent('cancel', dialog, { cancelable: true });
    fireEvent(dialog, cancel);
    expect(cancel.defaultPrevented).toBe(true);
    expect(onClose).toHaveBeenCalledOnce();
    expect(dialog).toHaveAttribute('open');
  });

  it('closes a sheet, but not a dialog, by a touch beside it', () => {
    const onClose = vi.fn();
    const { rerender } = render(
      <Dialog title="Steps" isOpen onClose={onClose} shape="sheet" children="list" />,
    );
    fireEvent.click(screen.getByText('list'));
    expect(onClose).not.toHaveBeenCalled();
    fireEvent.click(screen.getByRole('dialog'));
    expect(onClose).toHaveBeenCalledOnce();
    rerender(<Dialog title="Steps" isOpen onClose={onClose} children="list" />);
    fireEvent.click(screen.getByRole('dialog'));
    expect(onClose).toHaveBeenCalledOnce();
  });

  it('has no close button where an answer is wanted', () => {
    render(<Dialog title="Was it turned?" isOpen onClose={vi.fn()} closeLabel={null} children="4B" />);
    expect(screen.queryByRole('button')).toBeNull();
  });
});
