import { fireEvent, render, screen, waitFor } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it } from 'vitest';
import type { RefusedRow } from '@/offline/database';
import { FixtureRun, type FixtureOptions, technician } from '../../../tests/support/floor-run';
import { Journal } from '../../../tests/support/journal';
import { smallPlan } from '../../../tests/support/small-documents';
import { NothingToDo } from './NothingToDo';
import { TakeOverScreen } from './TakeOverScreen';

const CAP = 'build.tighten@rod1';
const mate = { id: 'mate', name: 'M. Ate', roles: ['technician'] };

function open(journal: Journal, options: Partial<FixtureOptions> = {}) {
  render(<FixtureRun journal={journal} person={mate} {...options} over={() => <TakeOverScreen />} />);
  return userEvent.setup();
}

const main = () => screen.getByRole('button', { name: 'Take the job over' });

describe('taking a job over', () => {
  it('says from whom and what came last, and wants the PIN at the first of a shift', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.tray-off');
    const user = open(journal);
    expect(screen.getByRole('heading', { name: 'Take over from T. Nician' })).toBeVisible();
    expect(screen.getByText(/^Last, 2 Jun, .*: /)).toBeVisible();
    expect(main()).toHaveAttribute('aria-disabled', 'true');
    expect(main()).toHaveAccessibleDescription('enter your PIN');
    for (const digit of '4711') await user.click(screen.getByRole('button', { name: digit }));
    await user.click(main());
    expect(journal.entries.at(-1)).toMatchObject({
      kind: 'took-over',
      by: 'mate',
      data: { from: 'tech', firstOfShift: true },
    });
  });

  it('says that a cap stands half tightened', () => {
    const journal = new Journal(smallPlan()).performUntil(CAP);
    journal.tightenOnce(CAP);
    open(journal);
    expect(screen.getByText(/1A and 1B stand half tightened\. You are asked/)).toBeVisible();
  });

  it('says why the last take-over was refused, to the one who made it', () => {
    const journal = new Journal(smallPlan()).performUntil('strip.tray-off');
    const entry = journal.draft('took-over', { firstOfShift: true }, { by: 'mate', with: [] });
    const row: RefusedRow = {
      ...{ id: entry.id, job: entry.job, entry, contentHash: 'h', signature: 's', key: 'k' },
      ...{ code: 'pin-wrong', reason: 'The PIN was wrong.', refusedAt: '2026-06-02T10:00:00.000Z' },
    };
    open(journal, { refused: [row] });
    expect(screen.getByText('Your last take-over was refused')).toBeVisible();
    expect(
      screen.getByText(/The PIN was wrong\. Take the job over again, with the right PIN\./),
    ).toBeVisible();
  });
});

describe('a job with nothing to do', () => {
  it('says who ended it, why, and what was open', () => {
    const journal = new Journal(smallPlan()).performUntil('strip.shell-look@1U');
    const open = journal.state.open.map(({ name }) => name);
    journal.record(
      'ended-unfinished',
      { reason: 'the block is cracked', open, notToBeRun: true },
      { by: 'sup' },
    );
    render(<FixtureRun journal={journal} over={() => <NothingToDo />} />);
    expect(screen.getByRole('heading', { name: /ended unfinished: not to be run/ })).toBeVisible();
    expect(screen.getByText(/^By S\. Visor, 2 Jun/)).toBeVisible();
    expect(screen.getByText('“the block is cracked”')).toBeVisible();
    expect(screen.getByText(`Still open: ${open.join(', ')}.`)).toBeVisible();
    expect(screen.getByRole('button', { name: 'Back to the jobs' })).toBeVisible();
  });

  it('says what everything waits for', () => {
    const journal = new Journal(smallPlan()).performUntil('strip.tray-off');
    journal.record(
      'deviation-raised',
      { class: 'A', words: 'it is bent', blocks: true },
      { step: 'strip.raise' },
    );
    render(<FixtureRun journal={journal} over={() => <NothingToDo />} />);
    expect(screen.getByText(/it is bent\. The supervisor disposes of it\./)).toBeVisible();
    expect(screen.getByRole('button', { name: 'What is open' })).toBeVisible();
  });
});

describe('taking a job up on a second tablet', () => {
  const first = {
    ...{ id: 'tablet', name: 'Bay 2' },
    ...{ lastHeardAt: '2026-06-02T09:40:00.000Z', lastRecordedAt: '2026-06-02T09:30:00.000Z' },
  };

  function openAt(journal: Journal, tablets = [first], person = mate) {
    const device = journal.state.working?.device;
    const known = tablets.map((tablet) => ({ ...tablet, id: device ?? '' }));
    render(
      <FixtureRun
        journal={journal}
        person={person}
        now={() => Date.parse(journal.state.lastAt ?? '') + 60_000}
        over={() => <TakeOverScreen device="another" tablets={known} />}
      />,
    );
    return userEvent.setup();
  }

  it('says when the first was last heard, and what may have happened on it since', () => {
    openAt(new Journal(smallPlan()).performUntil('strip.tray-off'));
    expect(screen.getByText('Bay 2 was last heard 2 Jun, 10:40')).toBeVisible();
    expect(screen.getByText(/the same bolt is soon turned twice/)).toBeVisible();
  });

  it('is done by holding, and a touch does nothing', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.tray-off');
    const user = openAt(journal);
    const before = journal.entries.length;
    for (const digit of '4711') await user.click(screen.getByRole('button', { name: digit }));
    await user.click(main());
    expect(journal.entries).toHaveLength(before);
    fireEvent.pointerDown(main(), { isPrimary: true, button: 0 });
    await waitFor(() => expect(journal.entries).toHaveLength(before + 1), { timeout: 4000 });
    expect(journal.entries.at(-1)).toMatchObject({ kind: 'took-over', data: { from: 'tech' } });
  });

  it('is asked of the same person too, and names nobody whom they take it from', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.tray-off');
    openAt(journal, [first], technician);
    expect(screen.getByRole('heading', { name: 'You worked on it at another tablet' })).toBeVisible();
    const before = journal.entries.length;
    fireEvent.pointerDown(screen.getByRole('button', { name: 'Go on here' }), { isPrimary: true, button: 0 });
    await waitFor(() => expect(journal.entries).toHaveLength(before + 1), { timeout: 4000 });
    expect(journal.entries.at(-1)?.data).not.toHaveProperty('from');
  });

  it('says so where it has not heard of that tablet', () => {
    openAt(new Journal(smallPlan()).performUntil('strip.tray-off'), []);
    expect(screen.getByText('When the other tablet was last heard is not known here')).toBeVisible();
  });
});
