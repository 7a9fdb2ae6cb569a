import { cleanup, render, screen, waitFor, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it } from 'vitest';
import { FixtureRun } from '../../../../tests/support/floor-run';
import { Journal } from '../../../../tests/support/journal';
import { smallPlan } from '../../../../tests/support/small-documents';

const GAUGE = 'strip.gauge@rod2';
const CHOOSE = 'strip.choose@rod2';

const main = () => document.querySelector<HTMLElement>('.main-action')!;
const press = async (name: RegExp | string) => userEvent.setup().click(screen.getByRole('button', { name }));
const pick = async (name: string) => userEvent.setup().click(screen.getByRole('radio', { name }));

/** Rod 2 was read too wide, and the supervisor sends it back to its shells. */
function reworked(): Journal {
  const journal = new Journal(smallPlan()).performUntil(GAUGE);
  for (const end of ['front', 'rear'] as const)
    journal.gaugeEnd(GAUGE, end, '0.072', { uncertainty: '0.001' });
  for (const { id } of journal.state.deviations)
    journal.record(
      'deviation-disposed',
      { deviation: id, disposition: 'rework', reason: 'too wide' },
      { by: 'sup' },
    );
  return journal;
}

async function runAt(journal: Journal, step = CHOOSE): Promise<void> {
  render(<FixtureRun journal={journal} start={{ step, isVisit: false }} />);
  await waitFor(() => expect(main()).toBeInTheDocument(), { timeout: 5000 });
}

/** Counts every grade on the number keys. */
async function count(...digits: string[]): Promise<void> {
  for (const digit of digits) {
    await press(digit);
    await press(/^(Next: |Use these counts)/);
  }
}

describe('the choice of shells on the Floor', () => {
  it('counts the shelf, proposes grades with the reasons, and records what was proposed', async () => {
    const journal = reworked();
    await runAt(journal);
    expect(screen.getByRole('heading', { name: 'Count the half shells on the shelf' })).toBeVisible();
    expect(screen.queryByRole('textbox', { name: /shelf/ })).toBeNull();
    await count('3', '4', '5');
    const proposal = within(screen.getByRole('region', { name: 'What is proposed' }));
    expect(proposal.getByText('upper black, lower black')).toBeVisible();
    expect(proposal.getByText('0.064')).toBeVisible();
    expect(proposal.getByText('Would be inside')).toBeVisible();
    expect(
      proposal.getByText('The rod is predicted within 0.016 of 0.048; 2 half shells change.'),
    ).toBeVisible();
    expect(proposal.getByText('Blue would be 0.068, further from 0.048.')).toBeVisible();
    await press(/^Shells chosen/);
    expect(journal.entries.at(-1)).toMatchObject({
      kind: 'chose-shells',
      data: {
        ...{ upper: { grade: 'black' }, lower: { grade: 'black' }, predicted: '0.064' },
        proposed: { upper: 'black', lower: 'black' },
        stock: [
          { grade: 'red', half: 'either', count: 3 },
          { grade: 'blue', half: 'either', count: 4 },
          { grade: 'black', half: 'either', count: 5 },
        ],
      },
    });
  });

  it('proposes no more than lies on the shelf, and remembers the count for the job', async () => {
    const journal = reworked();
    await runAt(journal);
    await count('0', '0', '1');
    expect(screen.getByText('upper blue, lower black')).toBeVisible();
    await press(/^Shells chosen/);
    // The blue one came back, the black one is in the rod.
    journal.performUntil(GAUGE);
    for (const end of ['front', 'rear'] as const)
      journal.gaugeEnd(GAUGE, end, '0.075', { uncertainty: '0.001' });
    for (const { id, disposed } of journal.state.deviations)
      if (!disposed)
        journal.record(
          'deviation-disposed',
          { deviation: id, disposition: 'rework', reason: 'still too wide' },
          { by: 'sup' },
        );
    cleanup();
    await runAt(journal);
    await press('Count again');
    expect(screen.getByRole('radio', { name: 'black' })).toHaveAccessibleDescription('0 on the shelf');
    expect(screen.getByRole('radio', { name: 'blue' })).toHaveAccessibleDescription('1 on the shelf');
  });

  it('takes other shells only with a reason, picked from rows', async () => {
    const journal = reworked();
    await runAt(journal);
    await press('Not counted');
    expect(screen.getByText(/^Nobody has counted the shelf/)).toBeVisible();
    await userEvent.setup().click(screen.getAllByRole('radio', { name: 'blue' })[0]!);
    expect(screen.getByText('not as proposed')).toBeVisible();
    expect(screen.getByText('upper blue, lower black')).toBeVisible();
    await press(/^Say why not as proposed/);
    expect(main()).toHaveAttribute('aria-disabled', 'true');
    await pick('That shell is damaged');
    await press(/^This is why/);
    await press(/^Shells chosen/);
    const { data } = journal.entries.at(-1)!;
    expect(data).toMatchObject({
      ...{ upper: { grade: 'blue' }, lower: { grade: 'black' }, predicted: '0.068' },
      ...{ proposed: { upper: 'black', lower: 'black' }, reason: 'That shell is damaged' },
    });
    expect(data).not.toHaveProperty('stock');
  });

  it('says why where nothing on the shelf helps, and leaves the choice free', async () => {
    const journal = reworked();
    await runAt(journal);
    await count('0', '0', '0');
    expect(screen.getByText(/^Rod 2: what would bring it between .* is not in stock\.$/)).toBeVisible();
    expect(screen.getByText('Would be outside')).toBeVisible();
    expect(main()).toHaveTextContent('Shells chosen');
  });

  it('says after the measurement how it compares with the prediction', async () => {
    const journal = reworked();
    const shell = { grade: 'black', lot: 'S-1' };
    journal.record('chose-shells', { upper: shell, lower: shell, predicted: '0.064' }, { step: CHOOSE });
    journal.performUntil(GAUGE).gauge(GAUGE, '0.059', '0.061', {});
    await runAt(journal, 'strip.clean@rod2');
    expect(
      await screen.findByText(/predicted 0\.064, measured 0\.060, 0\.004 tighter/, {}, { timeout: 5000 }),
    ).toBeVisible();
  });

  it('proposes nothing to whoever looks again at the shells of a rod that is inside', async () => {
    const journal = new Journal(smallPlan()).performUntil(GAUGE).gauge(GAUGE, '0.048', '0.048');
    render(<FixtureRun journal={journal} start={{ step: CHOOSE, isVisit: true }} />);
    expect(await screen.findByRole('button', { name: /^Shells chosen/ })).toBeVisible();
    expect(screen.queryByRole('region', { name: 'What is proposed' })).toBeNull();
  });
});
