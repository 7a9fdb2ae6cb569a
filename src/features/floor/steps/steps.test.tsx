import { render, screen, waitFor, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it, vi } from 'vitest';
import { FixtureRun, technician } from '../../../../tests/support/floor-run';
import { Journal } from '../../../../tests/support/journal';
import { smallPlan } from '../../../../tests/support/small-documents';
import { sha256OfBytes } from '@/offline/hashing';
import type * as Photo from '@/offline/photo';

vi.mock('@/offline/photo', async (original) => {
  const real = await original<typeof Photo>();
  return {
    ...real,
    roomForPhotos: async () => ({ low: false }),
    preparePhoto: async (file: Blob) => {
      const bytes = await file.arrayBuffer();
      return { hash: sha256OfBytes(new Uint8Array(bytes)), bytes, type: 'image/jpeg', width: 4, height: 3 };
    },
  };
});

/** The run at a step, once its screen is there. */
async function runAt(step: string) {
  const journal = new Journal(smallPlan()).performUntil(step);
  render(<FixtureRun journal={journal} start={{ step, isVisit: false }} />);
  await waitFor(() => expect(main()).toBeInTheDocument(), { timeout: 5000 });
  return { journal, user: userEvent.setup(), last: () => journal.entries.at(-1) };
}

const main = () => document.querySelector<HTMLElement>('.main-action')!;

async function key(user: ReturnType<typeof userEvent.setup>, digits: string) {
  for (const digit of digits) {
    await user.click(screen.getByRole('button', { name: digit === '.' ? 'decimal point' : digit }));
  }
}

describe('a step on the Floor', () => {
  it('is done at one touch, and the next one stands there', async () => {
    const { user, last } = await runAt('strip.raise');
    expect(screen.getByRole('heading', { name: 'Raise the vehicle' })).toBeVisible();
    await user.click(screen.getByRole('button', { name: /^Done/ }));
    expect(last()).toMatchObject({ kind: 'done', step: 'strip.raise' });
    expect(screen.getByRole('heading', { name: 'Strap it to the lift' })).toBeVisible();
    expect(screen.getByText(/^Done .*, on this tablet: Raise the vehicle$/)).toBeVisible();
  });

  it('places something temporary and says what it bars', async () => {
    const { user, last } = await runAt('strip.strap');
    expect(screen.getByText(/it bars lowering or moving the vehicle and the handover/)).toBeVisible();
    await user.click(screen.getByRole('button', { name: /^Placed/ }));
    expect(last()).toMatchObject({ kind: 'placed', step: 'strip.strap' });
  });

  it('takes something off with its count and its place', async () => {
    const { user, last } = await runAt('strip.tray-off');
    await user.click(screen.getByRole('button', { name: /^Off/ }));
    expect(last()).toMatchObject({ kind: 'removed', data: { count: 8, into: 'rack 1' } });
  });

  it('takes another place for what comes off', async () => {
    const { user, last } = await runAt('strip.tray-off');
    await user.click(screen.getByRole('button', { name: 'Other place' }));
    await user.click(screen.getByRole('radio', { name: 'tray 2' }));
    await user.click(screen.getByRole('button', { name: /^Off/ }));
    expect(last()).toMatchObject({ kind: 'removed', data: { count: 8, into: 'tray 2' } });
  });

  it('counts on a pad and never offers what was counted before', async () => {
    const { user, journal, last } = await runAt('strip.rags-out');
    expect(main()).toHaveAttribute('aria-disabled', 'true');
    await key(user, '12');
    await user.click(screen.getByRole('button', { name: /^Keep 12 rags/ }));
    expect(last()).toMatchObject({ kind: 'counted', data: { count: 12 } });
    expect(journal.state.tallies.rags).toEqual({ out: 12 });
  });

  it('shows what went out only after the own count is kept, and opens a deviation where they differ', async () => {
    const { user, journal } = await runAt('build.rags-in');
    expect(screen.queryByText(/12 went out/)).toBeNull();
    await key(user, '11');
    await user.click(screen.getByRole('button', { name: /^Keep 11 rags/ }));
    expect(screen.getByText('Not all of them')).toBeVisible();
    expect(screen.getByText(/12 went out/)).toBeVisible();
    expect(journal.state.deviations.at(-1)).toMatchObject({ rule: 'count-differs', blocks: true });
  });

  it('answers every check in order at one touch', async () => {
    const { user, last } = await runAt('strip.shell-look@1U');
    await user.click(screen.getByRole('button', { name: /^All in order/ }));
    expect(last()).toMatchObject({ kind: 'inspected', data: { checks: [{ id: 'sound', ok: true }] } });
  });

  it('takes a check that is not in order with its words, and stays for the deviation', async () => {
    const { user, journal, last } = await runAt('strip.shell-look@1U');
    await user.click(screen.getByRole('button', { name: 'Is shell 1U sound?' }));
    await user.click(screen.getByRole('button', { name: 'Say what is wrong' }));
    await user.type(screen.getByRole('textbox', { name: /^What is wrong/ }), 'copper shows');
    await user.click(screen.getByRole('button', { name: /^Keep: not in order/ }));
    expect(last()).toMatchObject({ data: { checks: [{ ok: false, note: 'copper shows' }] } });
    expect(journal.state.deviations.at(-1)).toMatchObject({ rule: 'not-in-order' });
    expect(screen.getByText(/A deviation is open on this step/)).toBeVisible();
  });

  it('asks the lot of a part and picks it from the kit check later', async () => {
    const { user, last } = await runAt('strip.old-shell-kit');
    expect(main()).toHaveTextContent('the lot is needed');
    await key(user, 'S-1');
    await user.click(screen.getByRole('button', { name: /^Confirmed/ }));
    expect(last()).toMatchObject({ kind: 'fitted', data: { count: 8, lot: 'S-1' } });
  });

  it('puts a one-use item on again with the lot of the new one', async () => {
    const { user, last } = await runAt('build.sump-on');
    await key(user, 'G7');
    await user.click(screen.getByRole('button', { name: /^Refitted/ }));
    expect(last()).toMatchObject({ kind: 'refitted', data: { lot: 'G7' } });
  });

  it('keeps what was poured, not what should have been', async () => {
    const { user, last } = await runAt('build.oil');
    expect(main()).toHaveAttribute('aria-disabled', 'true');
    await key(user, '4.1');
    await user.click(screen.getByRole('button', { name: /^Filled 4.1 L/ }));
    expect(last()).toMatchObject({ kind: 'filled', data: { quantity: '4.1', unit: 'L' } });
  });

  it('judges a reading only after it is kept', async () => {
    const { user, last } = await runAt('build.side@rod1');
    await key(user, '9.5');
    expect(screen.queryByText('No limit known')).toBeNull();
    await user.click(screen.getByRole('button', { name: /^Keep 9.5/ }));
    expect(last()).toMatchObject({ kind: 'read', data: { value: '9.5', how: 'typed' } });
    expect(screen.getByText('No limit known')).toBeVisible();
    expect(screen.getByText(/A deviation is open\. The supervisor disposes of it/)).toBeVisible();
  });

  it('turns the crank to its stop', async () => {
    const { user, journal, last } = await runAt('strip.turn-to@stop1');
    const step = journal.step('strip.turn-to@stop1');
    const angle = step.kind === 'turn' ? step.toAngle : undefined;
    await user.click(screen.getByRole('button', { name: new RegExp(`^Turned to ${angle}°`) }));
    expect(last()).toMatchObject({ kind: 'turned', data: { toAngle: angle } });
  });

  it('says why the crank may not turn while a cap is off', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.shell-look@1U');
    render(<FixtureRun journal={journal} start={{ step: 'build.turns', isVisit: true }} />);
    expect(await screen.findByText('Not yet')).toBeVisible();
    expect(screen.getByRole('button', { name: /^Back to what can be done/ })).toBeEnabled();
  });

  it('shows a photograph before it is kept, and keeps it with where it came from', async () => {
    const { user, last } = await runAt('strip.arrival');
    URL.createObjectURL = () => 'blob:test';
    URL.revokeObjectURL = () => undefined;
    const file = new File(['pixels'], 'a.jpg', { type: 'image/jpeg' });
    await user.upload(screen.getByLabelText('Photograph from the camera'), file);
    await user.click(await screen.findByRole('button', { name: /^Keep the photograph/ }));
    expect(last()).toMatchObject({
      kind: 'photographed',
      data: { from: 'camera here', subject: 'arrival', bytes: 6, identity: true },
    });
  });

  it('chooses both shells with the lot of the kit check', async () => {
    const { user, last } = await runAt(smallPlan().steps.find(({ kind }) => kind === 'choose-shells')!.id);
    await user.click(screen.getByRole('button', { name: /^Shells chosen/ }));
    expect(last()).toMatchObject({
      kind: 'chose-shells',
      data: { upper: { grade: 'blue', lot: 'lot shells' }, lower: { grade: 'blue', lot: 'lot shells' } },
    });
  });

  it('drives the road test with the odometer before and after', async () => {
    const { user, last } = await runAt('build.drive');
    await user.click(await screen.findByRole('button', { name: 'Another reading' }));
    await key(user, '1000');
    await user.click(screen.getByRole('button', { name: /^Start the road test/ }));
    expect(last()).toMatchObject({ kind: 'drive-started', data: { odometer: '1000', unit: 'km' } });
    await user.click(screen.getByRole('button', { name: 'Another reading' }));
    await key(user, '0990');
    await user.click(screen.getByRole('button', { name: /^End the road test/ }));
    expect(screen.getByRole('alert')).toHaveTextContent('An odometer does not run backwards.');
    for (let i = 0; i < 3; i += 1)
      await user.click(screen.getByRole('button', { name: 'erase the last digit' }));
    await key(user, '1001');
    await user.click(screen.getByRole('button', { name: /^End the road test/ }));
    expect(last()).toMatchObject({ kind: 'drive-ended', data: { odometer: '1001' } });
    expect(screen.getByText(/That is less than asked/)).toBeVisible();
  });

  it('offers what the odometer is likely to show, and moves on from a road test that was long enough', async () => {
    const { user, journal, last } = await runAt('build.drive');
    const [likely] = await screen.findAllByRole('radio');
    await user.click(likely!);
    await user.click(screen.getByRole('button', { name: /^Start the road test/ }));
    expect(last()).toMatchObject({ data: { odometer: journal.state.odometer!.value } });
    await user.click(screen.getAllByRole('radio')[0]!);
    expect(main()).toHaveTextContent(/ km driven/);
    await user.click(screen.getByRole('button', { name: /^End the road test/ }));
    expect(screen.getByRole('heading', { name: 'Hand over' })).toBeVisible();
  });

  it('keeps a gap by the blade that passes at two touches, and has keys for another value', async () => {
    const plan = smallPlan();
    const sideClearance = { ...plan.limits.sideClearance!, low: '0.15', high: '0.30' };
    const journal = new Journal({ ...plan, limits: { ...plan.limits, sideClearance } });
    const step = plan.steps.find(({ kind }) => kind === 'read')!.id;
    render(<FixtureRun journal={journal.performUntil(step)} start={{ step, isVisit: false }} />);
    const user = userEvent.setup();
    const last = () => journal.entries.at(-1);
    await waitFor(() => expect(main()).toHaveTextContent('touch a blade'));
    await user.click(screen.getByRole('button', { name: 'Other value' }));
    await key(user, '0.23');
    expect(main()).toHaveTextContent('Keep 0.23 mm');
    await user.click(screen.getByRole('button', { name: 'By blade' }));
    await user.click(screen.getByRole('button', { name: '0.20 mm' }));
    expect(screen.queryByText('Inside')).toBeNull();
    await user.click(screen.getByRole('button', { name: /^Keep 0.20 mm/ }));
    expect(last()).toMatchObject({ kind: 'read', data: { value: '0.20', unit: 'mm', how: 'typed' } });
    const verdict = within(await screen.findByRole('region', { name: 'The reading just kept' }));
    expect(verdict.getByText('Inside')).toBeVisible();
  });

  it('takes a lot from a scanner that types it and ends with Enter, without a touch', async () => {
    const { user, last } = await runAt('strip.old-shell-kit');
    await user.keyboard('r-77');
    expect(screen.getByRole('textbox')).toHaveValue('R-77');
    await user.keyboard('{Enter}');
    expect(last()).toMatchObject({ kind: 'fitted', data: { lot: 'R-77' } });
    expect(screen.getByText(/Shells on the trolley, lot R-77$/)).toBeVisible();
  });

  it('lets a second scan replace the first', async () => {
    const { user } = await runAt('strip.old-shell-kit');
    await user.keyboard('A1');
    screen.getByRole('textbox').blur();
    await user.keyboard('B2');
    expect(screen.getByRole('textbox')).toHaveValue('B2');
  });

  it('lets whoever may witness a point say so', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.turn-to@stop1');
    render(<FixtureRun journal={journal} start={{ step: 'strip.look', isVisit: true }} />);
    const user = userEvent.setup();
    await user.click(await screen.findByRole('radio', { name: /S. Visor/ }));
    await user.click(screen.getByRole('button', { name: /^I have looked/ }));
    expect(journal.entries.at(-1)).toMatchObject({ kind: 'witnessed', by: 'sup' });
  });

  it('makes safe, parks, and offers to resume', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.raise');
    render(<FixtureRun journal={journal} start={{ step: 'strip.park', isVisit: true }} />);
    const user = userEvent.setup();
    await user.click(await screen.findByRole('button', { name: /^Safe, park the job/ }));
    expect(journal.state.phase).toBe('parked');
    await user.click(await screen.findByRole('button', { name: /^As it was left, resume/ }));
    expect(journal.state.phase).toBe('running');
  });

  it('is handed over by a supervisor only', async () => {
    const journal = new Journal(smallPlan()).performUntil('build.hand-over');
    render(<FixtureRun journal={journal} person={technician} />);
    await waitFor(() => expect(main()).toHaveTextContent('a supervisor hands over'));
  });

  it('says in words why something was not recorded', async () => {
    const { user, journal } = await runAt('strip.raise');
    journal.workshop.people[0]!.active = false;
    await user.click(screen.getByRole('button', { name: /^Done/ }));
    expect(screen.getByRole('alert')).toHaveTextContent('Not recorded');
    expect(screen.getByRole('alert')).toHaveTextContent('no longer active');
    expect(journal.state.steps['strip.raise']?.status).toBe('open');
  });
});

describe('a watch', () => {
  it('runs from the record of its start, asks when a look is due, and ends when its time is over', async () => {
    const journal = new Journal(smallPlan()).performUntil('build.warm');
    journal.record('watch-started', {}, { step: 'build.warm' });
    const startedAt = Date.parse(journal.state.lastAt!);
    let elapsed = 5_000;
    const { unmount } = render(<FixtureRun journal={journal} now={() => startedAt + elapsed} />);
    await screen.findByRole('timer');
    expect(main()).toHaveTextContent('next look at 15 s');
    unmount();
    elapsed = 20_000;
    const user = userEvent.setup();
    const again = render(<FixtureRun journal={journal} now={() => startedAt + elapsed} />);
    await screen.findByText(/stop the engine at once/);
    const { low } = journal.plan.limits.oilPressure!;
    await key(user, String(Number(low) + 1));
    await user.click(screen.getByRole('button', { name: /^Keep/ }));
    expect(journal.entries.at(-1)).toMatchObject({
      kind: 'watch-checked',
      data: { check: 'pressure', ok: true },
    });
    again.unmount();
  });

  it('says stop, large, when a look that must be in order is not', async () => {
    const journal = new Journal(smallPlan()).performUntil('build.warm');
    journal.record('watch-started', {}, { step: 'build.warm' });
    journal.record(
      'watch-checked',
      { check: 'pressure', ok: false, value: '0.1', unit: 'bar' },
      { step: 'build.warm' },
    );
    render(<FixtureRun journal={journal} />);
    expect(await screen.findByRole('alert')).toHaveTextContent('Stop the engine now');
    await userEvent.setup().click(screen.getByRole('button', { name: /^Stopped/ }));
    expect(journal.entries.at(-1)).toMatchObject({ kind: 'watch-ended', data: { early: true } });
  });
});
