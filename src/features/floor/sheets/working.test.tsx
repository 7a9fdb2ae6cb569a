import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it, vi } from 'vitest';
import { FixtureRun, type FixtureOptions } from '../../../../tests/support/floor-run';
import { angleTool, Journal, torqueTool } from '../../../../tests/support/journal';
import { smallPlan } from '../../../../tests/support/small-documents';
import type { SignedInPerson } from '../floor-store';
import { PersonSheet } from './PersonSheet';
import { ToolSheet } from './ToolSheet';

const CAP = 'build.tighten@rod1';
const sheet = () => within(screen.getByRole('dialog'));
const main = () => screen.getByRole('dialog').querySelector<HTMLElement>('.main-action')!;

const mate = {
  person: 'mate',
  name: 'M. Ate',
  roles: ['technician'],
  sessionUntil: '2027-01-01T00:00:00.000Z',
  hasKey: true,
  mustSignIn: false,
};
const tech: SignedInPerson = { ...mate, person: 'tech', name: 'T. Nician' };

/** A cap on its final fit after so many single actions. */
function capAfter(actions: number): Journal {
  const journal = new Journal(smallPlan()).performUntil(CAP);
  journal.record('tool-taken', { use: 'torque', tool: torqueTool });
  journal.record('tool-taken', { use: 'angle', tool: angleTool });
  for (let i = 0; i < actions; i += 1) journal.tightenOnce(CAP);
  return journal;
}

async function keyPin(digits: string) {
  for (const digit of digits) await userEvent.setup().click(sheet().getByRole('button', { name: digit }));
}

describe('the sheet of who is working', () => {
  function open(journal: Journal, { signedIn = [tech, mate] as SignedInPerson[] } = {}) {
    const calls = {
      onClose: vi.fn(),
      onChanged: vi.fn(async () => undefined),
      onHelpers: vi.fn(),
      onSignOut: vi.fn(),
    };
    const over: FixtureOptions['over'] = (step) => <PersonSheet step={step} signedIn={signedIn} {...calls} />;
    render(<FixtureRun journal={journal} start={{ step: CAP, isVisit: false }} over={over} />);
    return { ...calls, user: userEvent.setup() };
  }

  it('lets somebody else take over with their PIN and a note', async () => {
    const journal = capAfter(0);
    const { user, onChanged, onClose } = open(journal);
    await user.click(sheet().getByRole('button', { name: 'M. Ate takes over' }));
    expect(main()).toHaveTextContent('enter the PIN');
    await keyPin('4711');
    await user.click(sheet().getByRole('button', { name: 'Add a note' }));
    await user.type(sheet().getByRole('textbox', { name: 'Note for the handover' }), 'bolts are laid out');
    await user.click(main());
    expect(journal.entries.at(-1)).toMatchObject({
      kind: 'took-over',
      by: 'mate',
      data: { from: 'tech', firstOfShift: true, note: 'bolts are laid out' },
    });
    expect(onChanged).toHaveBeenCalledWith(expect.objectContaining({ id: 'mate' }));
    expect(onClose).toHaveBeenCalledOnce();
  });

  it('takes nobody over in the middle of a cycle unless the bolts start again', async () => {
    const journal = capAfter(1);
    const { user } = open(journal);
    expect(sheet().getByText(/1A and 1B are in the middle of a cycle/)).toBeVisible();
    await user.click(sheet().getByRole('button', { name: 'M. Ate takes over' }));
    await keyPin('4711');
    expect(main()).toHaveTextContent('not in the middle of a cycle');
    await user.click(sheet().getByRole('radio', { name: 'They are let off and start again' }));
    await user.click(main());
    expect(journal.entries.slice(-2)).toMatchObject([
      { kind: 'took-over', by: 'mate' },
      { kind: 'started-again', by: 'mate', data: { bolts: ['1A', '1B'] } },
    ]);
  });

  it('says who can’t take over yet, and why', () => {
    open(capAfter(0), { signedIn: [tech, { ...mate, hasKey: false }] });
    const button = sheet().getByRole('button', { name: 'M. Ate takes over' });
    expect(button).toHaveAttribute('aria-disabled', 'true');
    expect(button).toHaveTextContent('has no key on this tablet yet: sign in with a network');
  });

  it('puts people on and off the work, and signs whoever works here out', async () => {
    const { user, onHelpers, onSignOut } = open(capAfter(0), { signedIn: [tech] });
    expect(sheet().getByText(/Nobody else is signed in on this tablet/)).toBeVisible();
    await user.click(sheet().getByRole('checkbox', { name: 'M. Ate' }));
    expect(onHelpers).toHaveBeenCalledWith(['mate']);
    expect(sheet().queryByRole('checkbox', { name: 'G. One' })).toBeNull();
    await user.click(sheet().getByRole('button', { name: 'Sign T. Nician out' }));
    expect(onSignOut).toHaveBeenCalledOnce();
  });
});

describe('the sheet of tools', () => {
  function open(journal: Journal, hand: 'torque' | 'angle' | 'measuring' = 'torque') {
    const onClose = vi.fn();
    const onAdapter = vi.fn();
    render(
      <FixtureRun
        journal={journal}
        start={{ step: CAP, isVisit: false }}
        over={(step) => <ToolSheet hand={hand} step={step} onClose={onClose} onAdapter={onAdapter} />}
      />,
    );
    return { onClose, onAdapter, user: userEvent.setup() };
  }

  it('offers the one tool that is fit, and says what speaks against the other', async () => {
    const journal = capAfter(0);
    const { user, onClose } = open(journal);
    expect(sheet().getByRole('radio', { name: 'Torque wrench' })).toBeChecked();
    const late = sheet().getByRole('radio', { name: 'Old wrench' });
    expect(late).toBeDisabled();
    expect(late).toHaveAccessibleDescription(/^can’t be used: its calibration counted until/);
    await user.click(main());
    expect(journal.entries.at(-1)).toMatchObject({
      kind: 'tool-taken',
      data: { use: 'torque', tool: { id: 'w1', serial: 'TW-1' } },
    });
    expect(onClose).toHaveBeenCalledOnce();
  });

  it('records nothing until a tool is touched', () => {
    const journal = capAfter(0);
    const [wrench] = journal.workshop.tools;
    journal.workshop.tools.push({ ...wrench!, id: 'w2', name: 'Second wrench', serial: 'TW-2' });
    open(journal);
    expect(main()).toHaveTextContent('touch the tool');
    expect(main()).toHaveAttribute('aria-disabled', 'true');
  });

  it('works out the setting for an adapter from the torque that is wanted next', async () => {
    const { user, onAdapter } = open(capAfter(0));
    await user.click(sheet().getByRole('button', { name: /^An adapter is on it/ }));
    expect(onAdapter).toHaveBeenCalledExactlyOnceWith(10);
  });

  it('says what to do when the tablet knows no such tool', () => {
    open(capAfter(0), 'measuring');
    expect(sheet().getByText(/This tablet knows no such tool\. Enter it at a desk/)).toBeVisible();
  });
});
