import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it, vi } from 'vitest';
import type { Entry } from '@/domain/entry';
import type { OutboxRow, RefusedRow } from '@/offline/database';
import type { SyncStatus } from '@/offline/sync-status';
import { FixtureRun, type FixtureOptions } from '../../../../tests/support/floor-run';
import { angleTool, Journal, torqueTool } from '../../../../tests/support/journal';
import { smallPlan } from '../../../../tests/support/small-documents';
import { SyncSheet } from './SyncSheet';

const CAP = 'build.tighten@rod1';
const status: SyncStatus = {
  onTablet: 0,
  waiting: 0,
  sent: 31,
  refused: 0,
  photos: 0,
  signInAgain: [],
  running: false,
  words: 'All sent',
};

function capAfter(actions: number): Journal {
  const journal = new Journal(smallPlan()).performUntil(CAP);
  journal.record('tool-taken', { use: 'torque', tool: torqueTool });
  journal.record('tool-taken', { use: 'angle', tool: angleTool });
  for (let i = 0; i < actions; i += 1) journal.tightenOnce(CAP);
  return journal;
}

interface Opening extends Partial<FixtureOptions> {
  journal: Journal;
  shown?: Partial<SyncStatus>;
  hasUpdate?: boolean;
  pending?: OutboxRow[];
}

function open({ journal, shown = {}, hasUpdate = false, pending = [], ...options }: Opening) {
  const onUpdate = vi.fn();
  const onClose = vi.fn();
  render(
    <FixtureRun
      journal={journal}
      {...options}
      over={(step) => (
        <SyncSheet
          step={step}
          status={{ ...status, ...shown }}
          hasUpdate={hasUpdate}
          pending={pending}
          onUpdate={onUpdate}
          onClose={onClose}
        />
      )}
    />,
  );
  return { onUpdate, onClose, sheet: within(screen.getByRole('dialog')), user: userEvent.setup() };
}

function refusedRow(entry: Entry, code: string, reason: string): RefusedRow {
  const kept = { contentHash: 'h', signature: 's', key: 'k', refusedAt: '2026-06-02T10:00:00.000Z' };
  return { ...kept, id: entry.id, job: entry.job, entry, code, reason };
}

describe('the sheet of where the records are', () => {
  it('says how many are sent, when last, and what stands in the way', () => {
    const { sheet } = open({
      journal: new Journal(smallPlan()),
      shown: {
        words: '3 on this tablet',
        lastSyncAt: '2026-06-02T08:12:00.000Z',
        trouble: { code: 'no-network', words: 'The server was not reached. Nothing is lost.' },
      },
    });
    expect(sheet.getByRole('status')).toHaveTextContent('3 on this tablet');
    expect(sheet.getByRole('status')).toHaveTextContent(
      '31 made on this tablet are with the server. Last sent 2 Jun, 09:12.',
    );
    expect(sheet.getByRole('status')).toHaveTextContent('The server was not reached. Nothing is lost.');
  });

  it('says who has to sign in again after the server was restored, and that nothing is lost', () => {
    const { sheet } = open({ journal: new Journal(smallPlan()), shown: { signInAgain: ['Ann', 'Ben'] } });
    expect(sheet.getByRole('status')).toHaveTextContent('Ann and Ben have to sign in on this tablet again');
    expect(sheet.getByRole('status')).toHaveTextContent('Nothing is lost');
  });

  it('covers the screen while it is wiped', async () => {
    const { sheet, user } = open({ journal: new Journal(smallPlan()) });
    await user.click(sheet.getByRole('button', { name: 'Wipe the screen' }));
    expect(screen.getByText('Wipe the screen now')).toBeVisible();
    expect(screen.queryByRole('dialog')).toBeNull();
  });
});

describe('a new version', () => {
  const button = () => screen.queryByRole('button', { name: 'Use the new version' });

  it('is offered only where one waits, and between two actions', async () => {
    const none = open({ journal: new Journal(smallPlan()) });
    expect(button()).toBeNull();
    expect(none.onUpdate).not.toHaveBeenCalled();
  });

  it('is used at a touch where no cap is half done', async () => {
    const { user, onUpdate } = open({
      journal: capAfter(0),
      hasUpdate: true,
      start: { step: CAP, isVisit: false },
    });
    await user.click(button()!);
    expect(onUpdate).toHaveBeenCalledOnce();
  });

  it.each([
    ['in the middle of a cycle', 1],
    ['between the cycles', 6],
  ])('is barred with words in the middle of a cap, %s', async (_where, actions) => {
    const journal = capAfter(actions);
    const { user, onUpdate } = open({ journal, hasUpdate: true, start: { step: CAP, isVisit: false } });
    expect(button()).toHaveAttribute('aria-disabled', 'true');
    expect(button()).toHaveTextContent('1A and 1B stand half tightened: finish them first');
    await user.click(button()!);
    expect(onUpdate).not.toHaveBeenCalled();
  });

  it('is barred while something is being recorded', async () => {
    const { user, onUpdate } = open({ journal: new Journal(smallPlan()), hasUpdate: true, isBusy: true });
    expect(button()).toHaveTextContent('something is being recorded');
    await user.click(button()!);
    expect(onUpdate).not.toHaveBeenCalled();
  });
});

describe('what the server refused', () => {
  function refusedJob() {
    const journal = new Journal(smallPlan()).performUntil('strip.tray-off');
    const step = 'strip.raise';
    const done = journal.draft('done', {}, { by: 'tech', with: [], step });
    const tookOver = journal.draft('took-over', { firstOfShift: true }, { by: 'mate', with: [] });
    return {
      journal,
      refused: [
        refusedRow({ ...done, id: 'r1' }, 'overtaken', 'It was in order on the tablet, but not any more.'),
        refusedRow({ ...tookOver, id: 'r2' }, 'pin-wrong', 'The PIN was wrong. Sign again.'),
      ],
    };
  }

  it('is shown to its author first, with the reason and what to do next', () => {
    const { sheet } = open(refusedJob());
    const [own, others] = sheet.getAllByRole('heading', { level: 3 });
    expect(own).toHaveTextContent('Refused, yours: 1');
    expect(others).toHaveTextContent('Refused, of others: 1');
    const mine = within(own!.closest('section')!);
    expect(mine.getByText('It was in order on the tablet, but not any more.')).toBeVisible();
    expect(mine.getByText('Look at it as it stands now, and decide again.')).toBeVisible();
    expect(mine.getByText(/T\. Nician, .*; kept here/)).toBeVisible();
    const theirs = within(others!.closest('section')!);
    expect(theirs.getByText('Take the job over again, with the right PIN.')).toBeVisible();
  });

  it('leads to the step that it was about', async () => {
    const { sheet, user, onClose } = open(refusedJob());
    await user.click(sheet.getByRole('button', { name: /^Go to “Raise the vehicle”$/ }));
    expect(onClose).toHaveBeenCalledOnce();
    expect(screen.getByRole('heading', { level: 1, name: 'Raise the vehicle' })).toBeInTheDocument();
  });
});

describe('what waits at the server', () => {
  function row(journal: Journal, over: Partial<OutboxRow>): OutboxRow {
    const entry = journal.draft('done', {}, { by: 'tech', with: [], step: 'strip.raise' });
    const kept = { contentHash: 'h', signature: 's', key: 'k', place: 1, where: 'waiting' } as const;
    return { ...kept, id: entry.id, job: entry.job, entry, ...over };
  }

  it('says in words why, and what to do; what only waits its turn is counted', () => {
    const journal = new Journal(smallPlan()).performUntil('strip.tray-off');
    const reason = 'The handover waits for a photograph that has not come to the server yet: “arrival”.';
    const pending = [
      row(journal, { id: 'w1', code: 'photograph-missing', reason }),
      row(journal, { id: 'w2', code: 'earlier-missing', reason: 'Record 8 has not come yet.' }),
      row(journal, { id: 'w3', where: 'on this tablet' }),
    ];
    const { sheet } = open({ journal, pending });
    expect(sheet.getByRole('heading', { name: 'Waiting at the server: 2' })).toBeVisible();
    expect(sheet.getByText(reason)).toBeVisible();
    expect(sheet.getByText('It goes in by itself once the photograph is there.')).toBeVisible();
    expect(sheet.queryByText('Record 8 has not come yet.')).toBeNull();
    expect(sheet.getByText('One more waits only for these.')).toBeVisible();
  });

  it('says what the first one waits for where all wait for an earlier one', () => {
    const journal = new Journal(smallPlan()).performUntil('strip.tray-off');
    const code = 'earlier-missing';
    const reason = 'Record 8 of this tablet has not come yet. It goes first.';
    const pending = ['a', 'b', 'c'].map((id) => row(journal, { id, code, reason }));
    const { sheet } = open({ journal, pending });
    expect(sheet.getByText(reason)).toBeVisible();
    expect(sheet.getByText('2 more wait only for that.')).toBeVisible();
  });

  it('is not spoken of where nothing waits', () => {
    const journal = new Journal(smallPlan()).performUntil('strip.tray-off');
    const { sheet } = open({ journal, pending: [row(journal, { where: 'sent' })] });
    expect(sheet.queryByText(/Waiting at the server/)).toBeNull();
  });
});
