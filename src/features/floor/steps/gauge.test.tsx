import { render, screen } from '@testing-library/react';
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
    expect(screen.getByText('Inside')).toBeVisible();
    expect(journal.entries.at(-1)).toMatchObject({
      kind: 'gauged',
      data: { end: 'front', by: 'band', clearance: band, again: 'first', threadLot: 'G1', cardLot: 'G1' },
    });
    await press(/^Next: rear/);
    await press(band);
    await press(new RegExp(`^Keep ${band} mm`));
    expect(journal.status(STEP)).toBe('done');
    expect(screen.getByRole('figure', { name: /^Oil clearance of every rod/ })).toBeVisible();
    await press(/^Next: /);
    expect(screen.getByRole('heading', { name: `Rod ${ROD}: thread gone, oiled, cap on` })).toBeVisible();
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
