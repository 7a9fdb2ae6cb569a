import { act, fireEvent, render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import type { ReactNode } from 'react';
import { describe, expect, it, vi } from 'vitest';
import { FixtureRun, supervisor, technician } from '../../../../tests/support/floor-run';
import { Journal } from '../../../../tests/support/journal';
import { smallPlan } from '../../../../tests/support/small-documents';
import type { Worker } from '../run-context';
import {
  AfterwardsSheet,
  EndUnfinishedSheet,
  ExtraWorkSheet,
  NotApplicableSheet,
  WaitingForPartSheet,
} from './WordsSheets';

/** A sheet over the job where a step comes next. */
function openSheet(
  until: string,
  sheet: (onClose: () => void, journal: Journal) => ReactNode,
  person: Worker = technician,
) {
  const journal = new Journal(smallPlan()).performUntil(until);
  const onClose = vi.fn();
  render(<FixtureRun journal={journal} person={person} over={() => sheet(onClose, journal)} />);
  const dialog = within(screen.getByRole('dialog'));
  const main = () => screen.getByRole('dialog').querySelector<HTMLElement>('.main-action, .hold-button')!;
  return { journal, onClose, dialog, main, user: userEvent.setup(), last: () => journal.entries.at(-1) };
}

const BARRED = ['aria-disabled', 'true'] as const;

describe('not applicable', () => {
  const sheet = (step: string) => (onClose: () => void, journal: Journal) => (
    <NotApplicableSheet step={journal.step(step)} onClose={onClose} />
  );

  it('asks for the reason and sets the step aside with it', async () => {
    const { dialog, main, user, last, onClose } = openSheet(
      'strip.tray-off',
      sheet('strip.tray-off'),
      supervisor,
    );
    expect(main()).toHaveAttribute(...BARRED);
    expect(main()).toHaveTextContent('give the reason');
    await user.click(dialog.getByRole('button', { name: 'not fitted on this vehicle' }));
    await user.click(main());
    expect(last()).toMatchObject({
      kind: 'not-applicable',
      step: 'strip.tray-off',
      data: { reason: 'not fitted on this vehicle' },
    });
    expect(onClose).toHaveBeenCalledOnce();
  });

  it('says who sets a step of class A aside, and stays open with the words when it is somebody else', async () => {
    const { journal, dialog, main, user, onClose } = openSheet(
      'build.tighten@rod1',
      sheet('build.tighten@rod1'),
    );
    expect(dialog.getByText('Class A: a supervisor sets it aside.')).toBeVisible();
    await user.type(dialog.getByRole('textbox'), 'no time');
    const before = journal.entries.length;
    await user.click(main());
    expect(dialog.getByRole('alert')).toHaveTextContent(/Not recorded\..*supervisor/);
    expect(journal.entries).toHaveLength(before);
    expect(onClose).not.toHaveBeenCalled();
  });
});

describe('waiting for a part', () => {
  const sheet = (onClose: () => void, journal: Journal) => (
    <WaitingForPartSheet step={journal.step('build.sump-on')} onClose={onClose} />
  );

  it('names the part, and then takes the lot of the one that came', async () => {
    const { dialog, main, user, last, journal } = openSheet('build.sump-on', sheet);
    await user.clear(dialog.getByRole('textbox'));
    expect(main()).toHaveTextContent('name the part');
    await user.type(dialog.getByRole('textbox'), 'sump gasket');
    await user.click(main());
    expect(last()).toMatchObject({ kind: 'waiting-for-part', data: { part: 'sump gasket' } });
    expect(journal.status('build.sump-on')).toBe('waiting for a part');
    expect(screen.getByRole('heading', { name: 'The part is here' })).toBeVisible();
    for (const key of ['G', '7']) await user.click(dialog.getByRole('button', { name: key }));
    await user.click(main());
    expect(last()).toMatchObject({ kind: 'part-arrived', data: { lot: 'G7' } });
    expect(journal.status('build.sump-on')).not.toBe('waiting for a part');
  });
});

describe('extra work', () => {
  it('is recorded only with who agreed and how', async () => {
    const { dialog, main, user, last } = openSheet('strip.tray-off', (onClose) => (
      <ExtraWorkSheet onClose={onClose} />
    ));
    expect(main()).toHaveTextContent('say what');
    await user.type(dialog.getByRole('textbox'), 'renew the engine mounts');
    expect(main()).toHaveTextContent('who agreed?');
    await user.click(dialog.getByRole('radio', { name: 'the customer' }));
    expect(main()).toHaveTextContent('how?');
    await user.click(dialog.getByRole('radio', { name: 'by telephone' }));
    await user.click(main());
    expect(last()).toMatchObject({
      kind: 'extra-work',
      data: { words: 'renew the engine mounts', approval: { who: 'customer', how: 'by telephone' } },
    });
  });
});

describe('recorded afterwards', () => {
  it('asks when and why, and hands both on to the next touch without recording anything', async () => {
    const onChoose = vi.fn();
    const { journal, dialog, main, user } = openSheet('strip.tray-off', (onClose) => (
      <AfterwardsSheet onClose={onClose} onChoose={onChoose} />
    ));
    const before = journal.entries.length;
    expect(main()).toHaveTextContent('when was it done?');
    await user.click(dialog.getByRole('radio', { name: 'an hour ago' }));
    expect(main()).toHaveTextContent('why is it late?');
    await user.click(dialog.getByRole('button', { name: 'tablet was charging' }));
    await user.click(dialog.getByRole('button', { name: 'forgotten' }));
    await user.click(main());
    expect(onChoose).toHaveBeenCalledWith({ when: 'an hour ago', reason: 'tablet was charging, forgotten' });
    expect(journal.entries).toHaveLength(before);
  });
});

describe('ending unfinished', () => {
  it('lists what is open, wants a reason, and is held, not touched', async () => {
    const { dialog, main, user, last, journal } = openSheet(
      'strip.shell-look@1U',
      (onClose) => <EndUnfinishedSheet onClose={onClose} />,
      supervisor,
    );
    expect(dialog.getByText('The engine is not to be run.')).toBeVisible();
    const open = journal.state.open.map(({ name }) => name);
    expect(open.length).toBeGreaterThan(1);
    expect(dialog.getByText(`Still open: ${open.join(', ')}.`)).toBeVisible();
    expect(main()).toHaveTextContent('give the reason');
    await user.type(dialog.getByRole('textbox'), 'the block is cracked');
    hold(main());
    await vi.waitFor(() => expect(journal.state.phase).toBe('ended unfinished'));
    expect(last()).toMatchObject({ data: { reason: 'the block is cracked', open, notToBeRun: true } });
  });
});

function hold(button: HTMLElement) {
  vi.useFakeTimers();
  fireEvent.pointerDown(button, { isPrimary: true, button: 0 });
  act(() => void vi.advanceTimersByTime(1300));
  vi.useRealTimers();
}
