import { render, screen, waitFor, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it } from 'vitest';
import { lastOf } from '@/domain/job-kept';
import { FixtureRun } from '../../../../tests/support/floor-run';
import { Journal } from '../../../../tests/support/journal';
import { shippedPlan } from '../../../../tests/support/shipped-plan';
import { smallPlan } from '../../../../tests/support/small-documents';
import '../WearBand';

const GRADE = 'strip.grade';
const main = () => document.querySelector<HTMLElement>('.main-action')!;
const bench = () => within(screen.getByRole('group', { name: /^The old shells/ }));
const shell = (name: string) => bench().getByRole('button', { name: new RegExp(`^${name},`) });
const patch = (name: RegExp) => screen.getByRole('button', { name });

async function atGrading(journal = new Journal(smallPlan()).performUntil(GRADE), step = GRADE) {
  render(<FixtureRun journal={journal} start={{ step, isVisit: false }} />);
  await waitFor(() => expect(main()).toBeInTheDocument());
  const graded = () => lastOf(journal.state.steps[step], 'graded')?.data.shells;
  return { journal, user: userEvent.setup(), graded };
}

describe('the old shells on the Floor', () => {
  it('are graded at three touches where they look alike, and what they say stands over the next screen', async () => {
    const { user, graded } = await atGrading();
    expect(main()).toHaveAttribute('aria-disabled', 'true');
    expect(main()).toHaveTextContent('touch the grade that most have');
    await user.click(patch(/^1 fine lines/));
    expect(screen.getByText('Touch the shells that are “fine lines”.')).toBeVisible();
    await user.click(screen.getByRole('button', { name: 'All 8: fine lines' }));
    await user.click(screen.getByRole('button', { name: /^Keep the 8 grades/ }));
    expect(graded()).toHaveLength(8);
    expect(graded()?.every(({ grade, flags }) => grade === 1 && flags.length === 0)).toBe(true);
    const band = within(await screen.findByRole('region', { name: 'The old shells just graded' }));
    expect(band.getByText('A hint, no verdict.')).toBeVisible();
    expect(band.getByText(/nothing stands out/)).toBeVisible();
    expect(band.getByRole('button', { name: 'Take back' })).toBeVisible();
  });

  it('take exceptions one by one, and signs that a second touch takes off', async () => {
    const { user, graded, journal } = await atGrading();
    await user.click(patch(/^3 copper showing/));
    await user.click(shell('2U'));
    expect(shell('2U')).toHaveTextContent('copper showing');
    await user.click(patch(/^0 even grey/));
    await user.click(screen.getByRole('button', { name: 'The other 7: even grey' }));
    expect(screen.queryByRole('button', { name: /^The other/ })).toBeNull();
    await user.click(patch(/^heat/));
    expect(screen.getByText(/narrowed, ends pulled in, darkened\. A second touch/)).toBeVisible();
    await user.click(shell('2U'));
    await user.click(shell('4L'));
    await user.click(shell('4L'));
    await user.click(patch(/^debris/));
    await user.click(shell('2U'));
    await user.click(main());
    expect(graded()?.filter(({ grade, flags }) => grade > 0 || flags.length > 0)).toEqual([
      { rod: 2, half: 'U', grade: 3, flags: ['heat', 'debris'] },
    ]);
    expect(journal.state.deviations.at(-1)).toMatchObject({ class: 'B', blocks: false, rod: 2 });
    expect(await screen.findByText(/^For the supervisor, with its pin: 2U\. Nothing waits/)).toBeVisible();
  });

  it('do nothing before a grade or a sign is taken, and can be begun anew', async () => {
    const { user } = await atGrading();
    await user.click(shell('1U'));
    expect(shell('1U')).toHaveTextContent('no grade yet');
    await user.click(patch(/^2 worn/));
    await user.click(shell('1U'));
    expect(main()).toHaveTextContent('7 shells have no grade');
    await user.click(screen.getByRole('button', { name: 'Clear all' }));
    expect(main()).toHaveTextContent('touch the grade that most have');
    expect(shell('1U')).toHaveTextContent('no grade yet');
  });

  it('offer the photograph of their own section until one is graded', async () => {
    const plan = shippedPlan('merrow-s6-rod-bearings');
    const step = plan.steps.find(({ kind }) => kind === 'grade-shells')!.id;
    const { user } = await atGrading(new Journal(plan).performUntil(step), step);
    await user.click(screen.getByRole('button', { name: 'Photograph' }));
    expect(await screen.findByRole('heading', { name: /^Photograph the old shells/ })).toBeVisible();
  });

  it('show what was kept when they are looked at again', async () => {
    const journal = new Journal(smallPlan()).performUntil(GRADE);
    journal.grade(GRADE, { '3L': { grade: 2, flags: ['edge'] } });
    render(<FixtureRun journal={journal} start={{ step: GRADE, isVisit: true }} />);
    const map = within(await screen.findByRole('table', { name: /^Wear of the old shells/ }));
    const lower = within(map.getByRole('row', { name: /^Lower/ })).getAllByRole('cell');
    expect(lower.map((cell) => cell.textContent)).toEqual([
      '1L, even grey',
      '2L, even grey',
      '3L, worn to the next layer, edge loading',
      '4L, even grey',
    ]);
    expect(screen.getByText(/^Edge loading at 3L: commonly/)).toBeVisible();
    expect(screen.getByText('Worst: worn to the next layer')).toBeVisible();
    expect(screen.getByText('Mean grade: uppers 0.0, lowers 0.5')).toBeVisible();
    expect(screen.getByRole('button', { name: 'Correct' })).toBeVisible();
  });

  it('stand in two rows of at most eight rods each, front first', async () => {
    const plan = shippedPlan('corvane-v8-rod-bearings');
    const step = plan.steps.find(({ kind }) => kind === 'grade-shells')!.id;
    await atGrading(new Journal(plan).performUntil(step), step);
    const names = bench()
      .getAllByRole('button')
      .map((button) => button.textContent.slice(0, 2));
    expect(names).toEqual(
      ['U', 'L'].flatMap((half) => [1, 2, 3, 4, 5, 6, 7, 8].map((rod) => `${rod}${half}`)),
    );
  });
});
