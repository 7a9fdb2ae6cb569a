import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it, vi } from 'vitest';
import { FixtureRun, supervisor, technician } from '../../../../tests/support/floor-run';
import { Journal } from '../../../../tests/support/journal';
import { smallPlan } from '../../../../tests/support/small-documents';
import type { SheetName, Worker } from '../run-context';
import { DeviationForm } from './DeviationForm';
import { JobSheet } from './JobSheet';

const LOOK = 'strip.shell-look@1U';

function jobAt(step: string, raise: { words: string; class?: 'A' | 'B' | 'C'; blocks?: boolean }[] = []) {
  const journal = new Journal(smallPlan()).performUntil(step);
  for (const { words, blocks = true, class: criticalClass = 'A' } of raise)
    journal.record('deviation-raised', { class: criticalClass, words, blocks }, { step });
  return journal;
}

const main = () => screen.getByRole('dialog').querySelector<HTMLElement>('.main-action')!;

describe('raising a deviation', () => {
  function open() {
    const journal = jobAt(LOOK);
    const onClose = vi.fn();
    render(<FixtureRun journal={journal} over={(step) => <DeviationForm step={step} onClose={onClose} />} />);
    return { journal, onClose, dialog: within(screen.getByRole('dialog')), user: userEvent.setup() };
  }

  it('starts with the class of the step, and blocks', async () => {
    const { journal, dialog, user, onClose } = open();
    const { class: own, rod } = journal.step(LOOK);
    expect(dialog.getByRole('radio', { name: own })).toBeChecked();
    expect(dialog.getByRole('radio', { name: 'waits' })).toBeChecked();
    expect(main()).toHaveTextContent('say what is wrong');
    await user.click(dialog.getByRole('button', { name: 'shell damaged' }));
    await user.click(dialog.getByRole('button', { name: 'dirt inside' }));
    await user.click(main());
    expect(journal.entries.at(-1)).toMatchObject({
      kind: 'deviation-raised',
      step: LOOK,
      data: { class: own, words: 'shell damaged, dirt inside', blocks: true, rod },
    });
    expect(onClose).toHaveBeenCalledOnce();
  });

  it('can be a remark that nothing waits for', async () => {
    const { journal, dialog, user } = open();
    await user.type(dialog.getByRole('textbox'), 'old mark on the cap');
    await user.click(dialog.getByRole('radio', { name: 'C' }));
    await user.click(dialog.getByRole('radio', { name: 'goes on' }));
    await user.click(main());
    expect(journal.entries.at(-1)).toMatchObject({ data: { class: 'C', blocks: false } });
  });
});

/** What lies over the screen now: a sheet may give way to another. */
const sheet = () => within(screen.getByRole('dialog'));

describe('the sheet of what is open', () => {
  function open(journal: Journal, person: Worker = technician) {
    const onSheet = vi.fn<(name: SheetName) => void>();
    const onLeave = vi.fn();
    const onSums = vi.fn();
    const onClose = vi.fn();
    render(
      <FixtureRun
        journal={journal}
        person={person}
        onSheet={onSheet}
        over={() => <JobSheet tablets={new Map()} onClose={onClose} onLeave={onLeave} onSums={onSums} />}
      />,
    );
    return { onSheet, onLeave, onSums, onClose, user: userEvent.setup() };
  }

  it('lists what is off or in for now with what it bars, and goes to the step that closes it', async () => {
    const journal = jobAt(LOOK);
    const { user, onClose } = open(journal);
    expect(sheet().getByRole('heading', { name: `Open list: ${journal.state.open.length}` })).toBeVisible();
    const [item] = journal.state.open;
    const row = within(
      sheet()
        .getByText(new RegExp(`^${item?.name ?? ''}: `))
        .closest('li')!,
    );
    expect(row.getByText(/; bars closing up/)).toBeVisible();
    await user.click(row.getByRole('button', { name: 'Go to it' }));
    expect(onClose).toHaveBeenCalledOnce();
  });

  it('says so when nothing is open, and leaves the job', async () => {
    const { user, onLeave, onSums } = open(new Journal(smallPlan()));
    expect(sheet().getByText('None.')).toBeVisible();
    expect(sheet().getByText('Nothing is off, and nothing temporary is in.')).toBeVisible();
    await user.click(sheet().getByRole('button', { name: 'Other job' }));
    expect(onLeave).toHaveBeenCalledOnce();
    await user.click(sheet().getByRole('button', { name: 'Sums' }));
    expect(onSums).toHaveBeenCalledOnce();
  });

  it('sends a technician who would dispose of a deviation to somebody who may', async () => {
    const { user, onSheet } = open(jobAt(LOOK, [{ words: 'shell damaged' }]));
    expect(sheet().getByText(/what follows waits/)).toBeVisible();
    await user.click(sheet().getByRole('button', { name: 'Dispose of it' }));
    expect(sheet().queryByRole('radio')).toBeNull();
    expect(sheet().getByText(/A supervisor or the quality lead disposes of a deviation/)).toBeVisible();
    await user.click(sheet().getByRole('button', { name: 'Change who is working' }));
    expect(onSheet).toHaveBeenCalledWith('person');
  });

  it('takes a supervisor’s disposition with its reason, and lists it as disposed of', async () => {
    const journal = jobAt(LOOK, [{ words: 'shell damaged' }]);
    journal.record('took-over', { firstOfShift: true }, { by: 'sup' });
    const { user } = open(journal, supervisor);
    await user.click(sheet().getByRole('button', { name: 'Dispose of it' }));
    expect(sheet().getByText(/class A, T\. Nician/)).toBeVisible();
    expect(main()).toHaveTextContent('what becomes of it?');
    await user.click(sheet().getByRole('radio', { name: 'Replace' }));
    expect(main()).toHaveTextContent('give the reason');
    await user.type(sheet().getByRole('textbox'), 'copper shows');
    await user.click(main());
    expect(journal.entries.at(-1)).toMatchObject({
      kind: 'deviation-disposed',
      by: 'sup',
      data: { disposition: 'replace', reason: 'copper shows' },
    });
    expect(sheet().getByText('None.')).toBeVisible();
    expect(sheet().getByText(/copper shows \(S\. Visor/)).toBeVisible();
  });

  it('asks for the customer’s word before a reading outside its limits is accepted', async () => {
    const gauge = smallPlan().steps.find(({ kind }) => kind === 'gauge')!;
    const outside = new Journal(smallPlan()).performUntil(gauge.id);
    outside.gaugeEnd(gauge.id, 'front', '0.090');
    outside.record('took-over', { firstOfShift: true }, { by: 'sup' });
    expect(outside.state.deviations.at(-1)).toMatchObject({ rule: 'clearance-outside' });
    const { user } = open(outside, supervisor);
    await user.click(sheet().getAllByRole('button', { name: 'Dispose of it' })[0]!);
    await user.click(sheet().getByRole('radio', { name: 'Accept as is' }));
    expect(main()).toHaveTextContent('the customer’s word is needed');
    await user.click(sheet().getByRole('radio', { name: 'in writing' }));
    await user.type(sheet().getByRole('textbox'), 'the customer accepts it');
    await user.click(main());
    expect(outside.entries.at(-1)).toMatchObject({
      data: { disposition: 'accept as is', customerAgreed: { how: 'in writing' } },
    });
  });
});
