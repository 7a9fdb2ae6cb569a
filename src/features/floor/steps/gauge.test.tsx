import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it, vi } from 'vitest';
import { FixtureRun } from '../../../../tests/support/floor-run';
import { Journal } from '../../../../tests/support/journal';
import { smallPlan } from '../../../../tests/support/small-documents';
import type { SheetName } from '../run-context';

/** The first rod that is measured: nothing is known of thread and card yet. */
const STEP = smallPlan().steps.find(({ kind }) => kind === 'gauge')!.id;
const ROD = /\d+$/.exec(STEP)![0];

async function runGauge() {
  const journal = new Journal(smallPlan()).performUntil(STEP);
  const onSheet = vi.fn<(name: SheetName) => void>();
  render(<FixtureRun journal={journal} start={{ step: STEP, isVisit: false }} onSheet={onSheet} />);
  await screen.findByText('Which thread, with its own card?');
  await press('G');
  await press('1');
  await press(/^Use this thread/);
  return { journal, onSheet };
}

const press = async (name: RegExp | string) => userEvent.setup().click(screen.getByRole('button', { name }));
const main = () => document.querySelector<HTMLElement>('.main-action')!;
async function key(digits: string) {
  for (const digit of digits) await press(digit === '.' ? 'decimal point' : digit);
}
const bandsOf = (journal: Journal) => journal.plan.engine.card.bands.map(({ clearance }) => clearance);

describe('the oil clearance', () => {
  it('is read front then rear off the card and judged only after each is kept', async () => {
    const { journal } = await runGauge();
    const target = journal.plan.limits.rodClearance!.target!;
    const band = bandsOf(journal).sort(
      (a, b) => Math.abs(Number(a) - Number(target)) - Math.abs(Number(b) - Number(target)),
    )[0]!;
    await press(band);
    expect(screen.queryByText('Inside')).toBeNull();
    await press(new RegExp(`^Keep ${band} mm`));
    expect(await screen.findByText('Inside')).toBeVisible();
    expect(journal.entries.at(-1)).toMatchObject({
      kind: 'gauged',
      data: { end: 'front', by: 'band', clearance: band, again: 'first', threadLot: 'G1', cardLot: 'G1' },
    });
    const band1 = within(await screen.findByRole('region', { name: 'The reading just kept' }));
    expect(band1.getByText(`rod ${ROD}, front`)).toBeVisible();
    expect(band1.getByRole('img', { name: /^Between / })).toBeVisible();
    expect(screen.getByRole('heading', { name: `Rod ${ROD}, rear` })).toBeVisible();
    await press(band);
    await press(new RegExp(`^Keep ${band} mm`));
    expect(journal.status(STEP)).toBe('done');
    expect(screen.getByRole('heading', { name: `Rod ${ROD}: thread gone, oiled, cap on` })).toBeVisible();
    const band2 = within(await screen.findByRole('region', { name: 'The reading just kept' }));
    expect(band2.getByText('Both inside')).toBeVisible();
    expect(band2.getAllByText(band)).toHaveLength(2);
  });

  it('leaves the verdict over the next screen only until something is recorded there', async () => {
    const journal = new Journal(smallPlan()).performUntil(STEP).gauge(STEP, '0.048', '0.048');
    const next = `strip.clean@rod${ROD}`;
    render(<FixtureRun journal={journal} start={{ step: next, isVisit: false }} />);
    expect(await screen.findByRole('region', { name: 'The reading just kept' })).toBeVisible();
    await press(/^Done/);
    expect(screen.queryByRole('region', { name: 'The reading just kept' })).toBeNull();
    expect(screen.getByText(/^Done .*thread gone, oiled, cap on$/)).toBeVisible();
  });

  it('is read again with the same thread as a second record, and the first one stays', async () => {
    const { journal } = await runGauge();
    const [, middle] = bandsOf(journal);
    await press(middle!);
    await press(/^Keep/);
    await press('Read again');
    await press(middle!);
    await press(/^Keep/);
    expect(journal.entries.slice(-2).map(({ data }) => 'again' in data && data.again)).toEqual([
      'first',
      'read again',
    ]);
  });

  it('measures an end by its parts, a size at a time, where the card can’t tell', async () => {
    const { journal } = await runGauge();
    const { low, high } = journal.plan.limits.rodClearance!;
    await press(
      bandsOf(journal).find((band) => Number(band) === Number(high) || Number(band) >= Number(high))!,
    );
    await press(/^Keep/);
    expect(screen.getByText('Unsure')).toBeVisible();
    await press('Measure the front by its parts');
    expect(screen.getByText(/^Read before: /)).toBeVisible();
    expect(main()).toHaveTextContent('key in the bore');
    await key('50.018');
    await press(/^Next: upper shell/);
    await key('1.985');
    await press(/^Next: lower shell/);
    await key('1.985');
    await press(/^Next: crankpin/);
    await key('46');
    expect(main()).toHaveTextContent('Keep 0.048 mm');
    expect(screen.queryByText('Inside')).toBeNull();
    await press(/^Keep 0.048 mm/);
    expect(Number('0.048')).toBeGreaterThan(Number(low));
    expect(journal.entries.at(-1)).toMatchObject({
      kind: 'gauged',
      data: {
        end: 'front',
        by: 'parts',
        clearance: '0.048',
        uncertainty: '0.002',
        again: 'read again',
        parts: { housingBore: '50.018', upperWall: '1.985', lowerWall: '1.985', journal: '46' },
      },
    });
    expect(screen.getByRole('heading', { name: `Rod ${ROD}, rear` })).toBeVisible();
    expect(screen.getByText('Inside')).toBeVisible();
  });

  it('says when parts can’t belong together, and lets each size be keyed in again', async () => {
    const { journal } = await runGauge();
    await press('By its parts');
    await key('50.018');
    await press(/^Next/);
    await key('1.985');
    await press(/^Next/);
    await key('1.985');
    await press(/^Next/);
    await key('47');
    expect(screen.getByRole('alert')).toHaveTextContent('These parts would bind');
    expect(main()).toHaveAttribute('aria-disabled', 'true');
    await press(/Housing bore/);
    expect(screen.getByRole('textbox', { name: 'Housing bore' })).toHaveValue('50.018');
    expect(journal.entries.at(-1)?.kind).not.toBe('gauged');
  });

  it('reads a width that was keyed in off the same card', async () => {
    const { journal } = await runGauge();
    await press('Type width');
    const narrowest = journal.plan.engine.card.bands.at(-1)!;
    for (const digit of narrowest.width) await press(digit === '.' ? 'decimal point' : digit);
    await press(/^Keep/);
    expect(journal.entries.at(-1)).toMatchObject({
      data: { by: 'width', width: narrowest.width, clearance: narrowest.clearance },
    });
  });

  it('says in words when the card can’t tell a width', async () => {
    await runGauge();
    await press('Type width');
    await press('9');
    expect(screen.getByRole('alert')).toHaveTextContent('wider than this card can tell');
  });

  it('says what to do when the thread is off the card', async () => {
    const { onSheet } = await runGauge();
    await press('wider');
    expect(screen.getByText(/wider than the widest band/)).toBeVisible();
    await press('Raise a deviation');
    expect(onSheet).toHaveBeenCalledWith('deviation');
  });

  it('opens the deviation from its own screen', async () => {
    const journal = new Journal(smallPlan()).performUntil(STEP).gauge(STEP, '0.048', '0.200');
    const onSheet = vi.fn<(name: SheetName) => void>();
    render(<FixtureRun journal={journal} start={{ step: STEP, isVisit: true }} onSheet={onSheet} />);
    expect(await screen.findByText('Outside')).toBeVisible();
    expect(screen.getByText(/The supervisor disposes of it; only that opens the way/)).toBeVisible();
    await press(/^See the deviation/);
    expect(onSheet).toHaveBeenCalledWith('job');
  });
});
