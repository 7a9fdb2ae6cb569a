import { act, fireEvent, render, screen, within } from '@testing-library/react';
import { describe, expect, it, vi } from 'vitest';
import { Caution } from './Caution';
import { Countdown } from './Countdown';
import { DataTable } from './DataTable';
import { DeskFrame } from './DeskFrame';
import { FloorFrame } from './FloorFrame';
import { LookPanel } from './LookPanel';
import { SignatureStamp } from './SignatureStamp';
import { syncWords } from './sync-words';
import { clockText } from './TimerFace';
import { Verdict } from './Verdict';
import { WipeCover } from './WipeCover';

const cells = {
  job: { label: 'Job 12' },
  phase: { label: 'Measurement' },
  sync: { label: 'All sent' },
  person: { label: 'Ada Brenn' },
};

describe('Caution', () => {
  it.each(['danger', 'warning', 'caution'] as const)('has the alert triangle for %s', (level) => {
    const { container } = render(<Caution level={level}>Hot oil.</Caution>);
    expect(screen.getByText(level.toUpperCase())).toBeVisible();
    expect(container.querySelector('.caution-sign')).not.toBeNull();
  });

  it('has no triangle for a notice', () => {
    const { container } = render(<Caution level="notice">Keep the key.</Caution>);
    expect(screen.getByText('NOTICE')).toBeVisible();
    expect(container.querySelector('.caution-sign')).toBeNull();
  });
});

describe('Verdict', () => {
  it.each([
    ['inside', 'Inside'],
    ['unsure', 'Unsure'],
    ['outside', 'Outside'],
    ['none', 'No limit known'],
  ] as const)('says %s in a word with a sign', (kind, word) => {
    const { container } = render(<Verdict kind={kind} />);
    expect(screen.getByText(word)).toBeVisible();
    expect(container.querySelector('svg')).not.toBeNull();
  });
});

describe('FloorFrame', () => {
  it('makes a target only of the cells that do something', () => {
    render(
      <FloorFrame
        {...cells}
        person={{ label: 'Ada Brenn', note: 'change', onPress: vi.fn(), does: 'change who is working' }}
      >
        step
      </FloorFrame>,
    );
    expect(screen.getAllByRole('button').map((button) => button.textContent)).toEqual([
      'Ada Brenn change, change who is working',
    ]);
  });

  it('flashes its edge anew for each record', () => {
    const { rerender } = render(<FloorFrame {...cells} children="step" />);
    expect(screen.queryByTestId('edge-flash')).toBeNull();
    rerender(<FloorFrame {...cells} flash={1} children="step" />);
    const first = screen.getByTestId('edge-flash');
    rerender(<FloorFrame {...cells} flash={2} children="step" />);
    expect(screen.getByTestId('edge-flash')).not.toBe(first);
  });
});

describe('syncWords', () => {
  it.each([
    [{ onTablet: 3, isOnline: false }, '3 on this tablet', 'no network, nothing lost'],
    [{ onTablet: 3, isOnline: true }, '3 on this tablet', 'being sent'],
    [{ onTablet: 0, isOnline: true, lastSent: '09:12' }, 'All sent', 'last 09:12'],
    [{ onTablet: 0, isOnline: false }, 'All sent', 'no network'],
    [{ onTablet: 2, isOnline: true, refused: 1 }, '1 refused', 'kept here, see why'],
  ])('says where the records are: %#', (props, label, note) => {
    expect(syncWords(props)).toEqual({ label, note });
  });
});

describe('Countdown', () => {
  it('tells the end once, by the clock and not by its own counting', () => {
    vi.useFakeTimers();
    let now = 0;
    const onEnd = vi.fn();
    render(
      <Countdown
        label="Watch from below"
        endsAtMs={60_000}
        secondsInAll={60}
        now={() => now}
        onEnd={onEnd}
      />,
    );
    expect(screen.getByRole('timer')).toHaveTextContent('1:00');
    now = 59_500;
    act(() => {
      vi.advanceTimersByTime(250);
    });
    expect(screen.getByRole('timer')).toHaveTextContent('0:01');
    expect(onEnd).not.toHaveBeenCalled();
    now = 90_000;
    act(() => {
      vi.advanceTimersByTime(1000);
    });
    expect(screen.getByRole('timer')).toHaveTextContent('0:00');
    expect(onEnd).toHaveBeenCalledOnce();
    vi.useRealTimers();
  });

  it('writes minutes and seconds', () => {
    expect([0, 9, 65, 1200].map(clockText)).toEqual(['0:00', '0:09', '1:05', '20:00']);
  });
});

describe('SignatureStamp', () => {
  it('never says more than is so', () => {
    render(<SignatureStamp state="to be checked" name="Mira Solvang" time="06 Oct 10:58" isNotIndependent />);
    expect(screen.getByText('SIGNED, TO BE CHECKED')).toBeVisible();
    expect(screen.getByText('NOT INDEPENDENT')).toBeVisible();
  });
});

describe('DeskFrame', () => {
  it('shows only the areas that it is given and says which is open', () => {
    render(
      <DeskFrame
        links={[
          { href: '/board', label: 'Board', isCurrent: true },
          { href: '/jobs', label: 'Jobs' },
        ]}
      />,
    );
    const links = screen.getByRole('navigation', { name: 'Areas' }).querySelectorAll('a');
    expect([...links].map((link) => [link.textContent, link.getAttribute('aria-current')])).toEqual([
      ['Board', 'page'],
      ['Jobs', null],
    ]);
  });
});

describe('DataTable', () => {
  it('says so when there is nothing', () => {
    render(
      <DataTable
        caption="Jobs"
        columns={[{ key: 'no', label: 'no.' }]}
        rows={[]}
        emptyWords="No job is open."
      />,
    );
    expect(screen.getByRole('cell', { name: 'No job is open.' })).toBeVisible();
  });
});

describe('WipeCover', () => {
  it('swallows touches until its time is over', () => {
    vi.useFakeTimers();
    let now = 0;
    const onEnd = vi.fn();
    const onClick = vi.fn();
    render(
      <>
        <button onClick={onClick}>Turned 110°</button>
        <WipeCover endsAtMs={10_000} secondsInAll={10} onEnd={onEnd} now={() => now} />
      </>,
    );
    fireEvent.click(screen.getByText('Wipe the screen now'));
    expect(onClick).not.toHaveBeenCalled();
    expect(onEnd).not.toHaveBeenCalled();
    now = 10_000;
    act(() => {
      vi.advanceTimersByTime(250);
    });
    expect(onEnd).toHaveBeenCalledOnce();
    vi.useRealTimers();
  });
});

describe('LookPanel', () => {
  it('shows what is chosen on this device and changes it at once', () => {
    localStorage.setItem('witnessmark.text', 'large');
    render(<LookPanel />);
    const sizes = within(screen.getByRole('group', { name: 'Size of text' }));
    expect(sizes.getByRole('radio', { name: 'Large' })).toBeChecked();
    fireEvent.click(sizes.getByRole('radio', { name: 'Largest' }));
    expect(document.documentElement).toHaveAttribute('data-text', 'largest');
    expect(sizes.getByRole('radio', { name: 'Largest' })).toBeChecked();
    fireEvent.click(sizes.getByRole('radio', { name: 'Normal' }));
    expect(document.documentElement).not.toHaveAttribute('data-text');
  });
});
