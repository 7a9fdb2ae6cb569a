import { fireEvent, render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it } from 'vitest';
import { Journal } from '../../../tests/support/journal';
import { readTrailOf } from '../../../tests/support/read-trail';
import { buildTrailBody, seal } from '../../../tests/support/sealed-trail';
import { smallPlan } from '../../../tests/support/small-documents';
import type { ReadTrail } from './read-trail';
import { TrailView } from './TrailView';

const bytes = new TextEncoder().encode(seal(buildTrailBody(4)));

function sealed(trail: ReadTrail): ReadTrail {
  return { ...trail, bytes };
}

async function show(trail: ReadTrail) {
  const shown = render(<TrailView job="0147" trail={sealed(trail)} zone="Europe/Lisbon" />);
  await screen.findByText(/^Unbroken from entry 1/, undefined, { timeout: 10_000 });
  return shown;
}

/** The button of a line; asked for by its label, which is quicker in a long table than by its role. */
function line(seq: number): HTMLElement {
  return screen.getByLabelText(`Entry ${seq}`);
}

function current(): string | null | undefined {
  return document.querySelector('tr[aria-current] button')?.textContent;
}

describe('the page of a trail', () => {
  const journal = new Journal(smallPlan()).performUntil('strip.turn-to@stop2');
  const total = journal.entries.length;

  it('begins at the newest entry and says so in words', async () => {
    await show(readTrailOf(journal));
    expect(screen.getByRole('heading', { level: 1 })).toHaveTextContent(`entry ${total} of ${total}`);
    expect(current()).toBe(String(total));
    expect(screen.getByRole('region', { name: `The job as it stood at entry ${total}` })).toBeVisible();
  });

  it('goes to the entry that is touched', async () => {
    await show(readTrailOf(journal));
    await userEvent.click(line(2));
    expect(current()).toBe('2');
    expect(screen.getByRole('slider', { name: 'Entry' })).toHaveValue('2');
    expect(screen.getByRole('region', { name: 'The job as it stood at entry 2' })).toBeVisible();
  });

  it('is walked with the keys from one stop of the Tab key', async () => {
    await show(readTrailOf(journal));
    const stops = screen.getAllByLabelText(/^Entry \d/).filter((button) => button.tabIndex === 0);
    expect(stops).toHaveLength(1);
    stops[0]?.focus();
    const user = userEvent.setup();
    await user.keyboard('{ArrowUp}{ArrowUp}');
    expect(current()).toBe(String(total - 2));
    expect(line(total - 2)).toHaveFocus();
    await user.keyboard('{Home}{ArrowUp}');
    expect(current()).toBe('1');
    await user.keyboard('{PageDown}{End}{ArrowDown}');
    expect(current()).toBe(String(total));
  });

  it('follows the strip, and leaves the focus on it', async () => {
    await show(readTrailOf(journal));
    const strip = screen.getByRole('slider', { name: 'Entry' });
    strip.focus();
    fireEvent.change(strip, { target: { value: '3' } });
    expect(current()).toBe('3');
    expect(strip).toHaveFocus();
  });

  it('shows what superseded, who helped, a wrong clock and a conflict at their lines', async () => {
    const trail = readTrailOf(journal, (entry) =>
      entry.seq === 3
        ? {
            ...entry,
            with: ['sup'],
            clockOffsetMs: 900_000,
            conflict: { code: 'done-already', why: 'Done on tablet 2.' },
          }
        : entry,
    );
    await show(trail);
    const row = within(line(3).closest('tr')!);
    expect(row.getByText('with S. Visor')).toBeVisible();
    expect(row.getByText('clock off')).toBeVisible();
    expect(row.getByText('conflict: Done on tablet 2.')).toBeVisible();
    await userEvent.click(line(3));
    expect(screen.getByText(/its clock was 15 min ahead/)).toBeVisible();
  });
});

describe('an entry that was corrected', () => {
  it('says old and new value, who, when and why, and leads both ways', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.clean@rod2');
    const at = journal.entries.findIndex(({ kind }) => kind === 'gauged') + 1;
    const reading = journal.entries[at - 1]!;
    const data = { ...reading.data, clearance: '0.052' };
    journal.record('corrected', { of: reading.id, class: 'substantive', reason: 'misread', data });
    const last = journal.entries.length;
    await show(readTrailOf(journal));
    const about = () => within(screen.getByRole('list', { name: 'Entries about this one' }));
    await userEvent.click(about().getByRole('button', { name: `Corrects entry ${at}` }));
    expect(current()).toBe(String(at));
    expect(about().getByText(/0\.048 mm/)).toBeVisible();
    expect(about().getByText(/^After: .*0\.052 mm/)).toBeVisible();
    expect(about().getByText(/T\. Nician, .*: misread/)).toBeVisible();
    await userEvent.click(about().getByRole('button', { name: `Corrected by entry ${last}` }));
    expect(current()).toBe(String(last));
  });
});

describe('the job as it stood', () => {
  const whole = new Journal(smallPlan()).performUntil(null);
  const signed = whole.entries.findIndex(({ kind }) => kind === 'signed') + 1;
  const journal = Object.assign(whole, { entries: whole.entries.slice(0, signed + 1) });

  it('has the signatures up to that entry as stamps, the newest with the signer’s words', async () => {
    await show(readTrailOf(journal));
    await userEvent.click(line(signed - 1));
    expect(screen.queryByText('SIGNED')).not.toBeInTheDocument();
    await userEvent.click(line(signed));
    const region = within(screen.getByRole('region', { name: /as it stood/ }));
    expect(region.getByText('SIGNED')).toBeVisible();
    expect(region.getByText('S. Visor')).toBeVisible();
    expect(region.getByText(/^Covers \d+ entries/)).toBeVisible();
    expect(region.getByText('The signer did no work in what this covers.')).toBeVisible();
  });

  it('says of a signature whose PIN nobody has checked that it is to be checked', async () => {
    await show(readTrailOf(journal, (entry) => ({ ...entry, pin: undefined })));
    await userEvent.click(line(signed));
    expect(screen.getByText('SIGNED, TO BE CHECKED')).toBeVisible();
  });
});
