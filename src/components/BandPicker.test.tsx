import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it, vi } from 'vitest';
import { BandPicker } from './BandPicker';

const bands = [
  { id: 'a', widthMm: 2.4, clearance: '0.030' },
  { id: 'b', widthMm: 1.2, clearance: '0.060' },
];

function renderBands(props: Partial<Parameters<typeof BandPicker>[0]> = {}) {
  const onPick = vi.fn();
  const rendered = render(
    <BandPicker label="Touch the band you read" bands={bands} onPick={onPick} {...props} />,
  );
  return { onPick, ...rendered };
}

describe('BandPicker', () => {
  it('tells which band was touched', async () => {
    const { onPick } = renderBands();
    await userEvent.click(screen.getByRole('button', { name: '0.060' }));
    expect(onPick).toHaveBeenCalledExactlyOnceWith('b');
  });

  it('draws the bands at their true proportions', () => {
    const { container } = renderBands();
    const [wide, narrow] = [...container.querySelectorAll('rect')].map((rect) =>
      Number(rect.getAttribute('width')),
    );
    expect(wide).toBeCloseTo(2 * narrow!);
  });

  it('says which band is picked', () => {
    renderBands({ picked: 'a' });
    expect(screen.getByRole('button', { name: '0.030' })).toHaveAttribute('aria-pressed', 'true');
    expect(screen.getByRole('button', { name: '0.060' })).toHaveAttribute('aria-pressed', 'false');
  });

  it('has a way out at both ends of the card', async () => {
    const onWider = vi.fn();
    const onNarrower = vi.fn();
    renderBands({ onWider, onNarrower });
    await userEvent.click(screen.getByRole('button', { name: 'wider' }));
    await userEvent.click(screen.getByRole('button', { name: 'narrower' }));
    expect(onWider).toHaveBeenCalledOnce();
    expect(onNarrower).toHaveBeenCalledOnce();
  });

  it('takes no touch once the reading is kept', async () => {
    const { onPick } = renderBands({ picked: 'a', isDisabled: true });
    await userEvent.click(screen.getByRole('button', { name: '0.060' }));
    expect(onPick).not.toHaveBeenCalled();
  });
});
