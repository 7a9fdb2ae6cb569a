import { act, fireEvent, render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it, vi } from 'vitest';
import { FixtureRun } from '../../../../tests/support/floor-run';
import { angleTool, Journal, torqueTool } from '../../../../tests/support/journal';
import { smallPlan } from '../../../../tests/support/small-documents';
import type { SheetName } from '../run-context';
import { ProblemSheet } from './ProblemSheet';
import { StepsSheet } from './StepsSheet';
import { TakeBackSheet } from './TakeBackSheet';

const CAP = 'build.tighten@rod1';
const sheet = () => within(screen.getByRole('dialog'));

function capAfter(actions: number): Journal {
  const journal = new Journal(smallPlan()).performUntil(CAP);
  journal.record('tool-taken', { use: 'torque', tool: torqueTool });
  journal.record('tool-taken', { use: 'angle', tool: angleTool });
  for (let i = 0; i < actions; i += 1) journal.tightenOnce(CAP);
  return journal;
}

function hold(name: RegExp) {
  vi.useFakeTimers();
  fireEvent.pointerDown(sheet().getByRole('button', { name }), { isPrimary: true, button: 0 });
  act(() => void vi.advanceTimersByTime(1300));
  vi.useRealTimers();
}

describe('the list of steps', () => {
  function open(journal: Journal) {
    const onClose = vi.fn();
    render(<FixtureRun journal={journal} over={(step) => <StepsSheet current={step} onClose={onClose} />} />);
    return { onClose, user: userEvent.setup() };
  }

  it('shows the phase in hand with every step’s standing in words, and the present one marked', () => {
    const journal = new Journal(smallPlan()).performUntil('strip.tray-off');
    open(journal);
    const line = (id: string) =>
      sheet().getByRole('button', { name: new RegExp(`^${journal.step(id).title}`) });
    expect(line('strip.raise')).toHaveTextContent('done');
    expect(line('strip.tray-off')).toHaveTextContent('can be done');
    expect(line('strip.tray-off').closest('li')).toHaveAttribute('aria-current', 'step');
    expect(line('strip.shell-look@1U')).toHaveTextContent(/not yet/);
    expect(line('strip.shell-look@1U')).toHaveTextContent(/comes first/);
  });

  it('tells how far each phase is, shows another, and goes to the step that is touched', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.tray-off');
    const { user, onClose } = open(journal);
    const [first, second] = journal.plan.phases;
    const phases = within(sheet().getByRole('group', { name: 'Phase to show' }));
    expect(phases.getByRole('button', { name: new RegExp(first!.name) })).toHaveAttribute(
      'aria-pressed',
      'true',
    );
    const other = phases.getByRole('button', { name: new RegExp(second!.name) });
    expect(other).toHaveTextContent(/0 of \d+/);
    await user.click(other);
    await user.click(
      sheet().getByRole('button', { name: new RegExp(`^${journal.step('build.oil').title}`) }),
    );
    expect(onClose).toHaveBeenCalledOnce();
    expect(await screen.findByText('Not yet')).toBeInTheDocument();
  });

  it('says in words that a deviation is open', () => {
    const journal = new Journal(smallPlan()).performUntil('strip.tray-off');
    journal.record(
      'deviation-raised',
      { class: 'A', words: 'it is bent', blocks: true },
      { step: 'strip.raise' },
    );
    open(journal);
    expect(sheet().getByRole('group', { name: 'Phase to show' })).toHaveTextContent('deviation open');
    expect(
      sheet().getByRole('button', { name: new RegExp(`^${journal.step('strip.raise').title}`) }),
    ).toHaveTextContent('deviation open');
  });
});

describe('the sheet of problems', () => {
  function open(journal: Journal, step: string) {
    const onSheet = vi.fn<(name: SheetName) => void>();
    const onClose = vi.fn();
    render(
      <FixtureRun
        journal={journal}
        start={{ step, isVisit: false }}
        onSheet={onSheet}
        over={(present) => <ProblemSheet step={present} onClose={onClose} />}
      />,
    );
    return { onSheet, onClose, user: userEvent.setup() };
  }

  it.each<[string, SheetName]>([
    ['Raise a deviation', 'deviation'],
    ['Take back the last act', 'take back'],
    ['Waiting for a part', 'waiting for a part'],
    ['Not applicable', 'not applicable'],
    ['Done earlier, recorded now', 'recorded afterwards'],
    ['Extra work', 'extra work'],
    ['Another torque wrench', 'torque tool'],
    ['Another angle gauge', 'angle tool'],
    ['End the job unfinished', 'end unfinished'],
  ])('leads from “%s” to its own sheet', async (label, name) => {
    const { user, onSheet } = open(new Journal(smallPlan()).performUntil('strip.tray-off'), 'strip.tray-off');
    await user.click(sheet().getByRole('button', { name: label }));
    expect(onSheet).toHaveBeenCalledWith(name);
  });

  it('goes to making safe and parking', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.tray-off');
    const { user, onClose } = open(journal, 'strip.tray-off');
    await user.click(sheet().getByRole('button', { name: 'Make safe and park' }));
    expect(onClose).toHaveBeenCalledOnce();
    expect(
      await screen.findByRole('heading', { level: 1, name: journal.step('strip.park').title }),
    ).toBeInTheDocument();
  });

  it('condemns a bolt that was turned too far, only when held', async () => {
    const journal = capAfter(2);
    open(journal, CAP);
    await userEvent.setup().click(sheet().getByRole('button', { name: /^1A was turned too far/ }));
    expect(journal.entries.at(-1)).not.toMatchObject({ data: { outcome: 'over' } });
    hold(/^1A was turned too far/);
    await vi.waitFor(() =>
      expect(journal.entries.at(-1)).toMatchObject({
        kind: 'tightened',
        step: CAP,
        data: { bolt: '1A', outcome: 'over', tool: { serial: 'AG-1' } },
      }),
    );
  });

  it('starts a cap again when nobody is sure', async () => {
    const journal = capAfter(2);
    open(journal, CAP);
    hold(/^Not sure: start 1A and 1B again/);
    await vi.waitFor(() =>
      expect(journal.entries.at(-1)).toMatchObject({ kind: 'started-again', data: { bolts: ['1A', '1B'] } }),
    );
  });
});

describe('taking back', () => {
  function open(journal: Journal, step = CAP) {
    const onClose = vi.fn();
    render(
      <FixtureRun
        journal={journal}
        start={{ step, isVisit: false }}
        over={() => <TakeBackSheet onClose={onClose} />}
      />,
    );
    return { onClose, user: userEvent.setup() };
  }

  it('says which act, and offers it again when it was only touched by mistake', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.tray-off');
    const { user, onClose } = open(journal, 'strip.tray-off');
    const of = journal.entries.at(-1)!;
    expect(sheet().getByText(new RegExp(journal.step(of.step!).title))).toBeVisible();
    await user.click(sheet().getByRole('button', { name: 'Touched by mistake, not done' }));
    expect(journal.entries.at(-1)).toMatchObject({
      kind: 'taken-back',
      data: { of: of.id, which: 'touched by mistake, not done' },
    });
    expect(journal.status(of.step!)).toBe('open');
    expect(onClose).toHaveBeenCalledOnce();
  });

  it('says before the touch what becomes of a bolt that was done wrong, and does that', async () => {
    const journal = capAfter(3);
    const { user } = open(journal);
    expect(sheet().getByText(/the bolt is condemned and its cap starts again/)).toBeVisible();
    await user.click(sheet().getByRole('button', { name: 'Done, but wrong' }));
    expect(journal.entries.at(-1)).toMatchObject({ kind: 'taken-back', data: { which: 'done, but wrong' } });
  });

  it('stays open with the words when the rules refuse', async () => {
    const journal = capAfter(1);
    const { user, onClose } = open(journal);
    journal.workshop.people[0]!.active = false;
    await user.click(sheet().getByRole('button', { name: 'Done, but wrong' }));
    expect(sheet().getByRole('alert')).toHaveTextContent(/Not recorded\..*no longer active/);
    expect(onClose).not.toHaveBeenCalled();
  });
});
