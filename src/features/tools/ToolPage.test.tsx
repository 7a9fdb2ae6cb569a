import { fireEvent, render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it } from 'vitest';
import { answerDesk, refused, type DeskAnswer } from '../../../tests/support/desk-server';
import { ToolPage } from './ToolPage';

const wrench = {
  ...{ id: 'w1', name: 'Torque wrench 20 to 100 N·m', kind: 'torque wrench', serial: 'TW-1' },
  ...{ rangeLow: '20', rangeHigh: '100', unit: 'N·m', dueOn: '2099-05-31', state: 'in use' },
  ...{ cycleLimit: 5000, cyclesUsed: 812, torqueType: 'II', torqueClass: 'A', failure: null },
};
const at = (set: string, reference: string) =>
  Array.from({ length: 5 }, () => ({ set, reference, unit: 'N·m' }));
const readings = [...at('20', '20.2'), ...at('60', '60'), ...at('100', '99')];
const passed = {
  ...{ id: 'c1', on: '2026-05-31', dueOn: '2099-05-31', certificate: 'C-1', readings },
  ...{ verdict: 'passed', reasons: [] },
};
const use = { periods: [{ since: '2026-05-31', until: null, jobs: [] }] };

async function show(
  tool: object = {},
  { canChange = true, more = {} }: { canChange?: boolean; more?: Record<string, DeskAnswer> } = {},
) {
  const server = answerDesk({
    'GET /api/tools/w1': { body: { ...wrench, calibrations: [passed], ...tool } },
    'GET /api/tools/w1/use': { body: use },
    ...more,
  });
  render(<ToolPage tool="w1" zone="Europe/Lisbon" canChange={canChange} canReadUse />);
  await screen.findByRole('heading', { level: 1 });
  const sent = () => server.requests.filter(({ method }) => method !== 'GET');
  return { sent, user: userEvent.setup() };
}

const cell = (point: number, reading: number) =>
  screen.getByLabelText(`Point ${point}: reference ${reading}`);

/** Fills whole lines of the grid; typing letter by letter is for what is about typing. */
function fill(values: readonly string[], from = 1) {
  for (const [i, value] of values.entries()) {
    for (let n = 1; n <= 5; n += 1) fireEvent.change(cell(from + i, n), { target: { value } });
  }
}

describe('the page of a tool', () => {
  it('shows its facts, how it stands, and its calibrations with their readings', async () => {
    await show();
    expect(screen.getByText('in date')).toBeVisible();
    expect(screen.getByText('type II, class A')).toBeVisible();
    expect(screen.getByText('812 of 5000')).toBeVisible();
    const drawn = screen.getByRole('figure', { name: /Readings between ± 4 %/ });
    expect(drawn).toHaveAccessibleName(
      'Readings between ± 4 %: 20 N·m within, 60 N·m within, 100 N·m within',
    );
    expect(drawn.querySelectorAll('.deviation-dot')).toHaveLength(15);
    expect(within(drawn).getByText('+1.0 %')).toBeVisible();
  });

  it('says why a calibration failed, and marks the readings that are out', async () => {
    const why = 'at 100 N·m 1 of 5 is off by more than ± 4 %, the worst by 11.111 %';
    const bad = [...readings.slice(0, -1), { set: '100', reference: '90', unit: 'N·m' }];
    await show({
      failure: why,
      calibrations: [{ ...passed, readings: bad, verdict: 'failed', reasons: [why] }],
    });
    expect(screen.getByText(`its last calibration failed: ${why}`)).toBeVisible();
    expect(screen.getByText(why)).toBeVisible();
    expect(document.querySelectorAll('.deviation-cross')).toHaveLength(1);
    expect(document.querySelectorAll('.deviation-dot')).toHaveLength(14);
  });

  it('lists where a tool that failed was used since its last good calibration', async () => {
    const steps = [{ step: 's1', title: 'Rod 3: final fit', entries: 6, lastAt: '2026-06-02T09:00:00.000Z' }];
    const jobs = [{ job: 'j1', number: '0147', steps }];
    const answer = { body: { periods: [{ ...use.periods[0], jobs }] } };
    await show({ failure: 'x' }, { more: { 'GET /api/tools/w1/use': answer } });
    expect(await screen.findByText(/look at these steps again/)).toBeVisible();
    expect(screen.getByRole('link', { name: '0147' })).toHaveAttribute('href', '/jobs/j1');
    expect(screen.getByText('Rod 3: final fit (6)')).toBeVisible();
  });

  it('offers nothing to change to those who may only read', async () => {
    await show({}, { canChange: false });
    expect(screen.queryByRole('button')).not.toBeInTheDocument();
  });

  it('withdraws it', async () => {
    const { sent, user } = await show({}, { more: { 'PATCH /api/tools/w1': { body: { id: 'w1' } } } });
    await user.click(screen.getByRole('button', { name: 'Withdraw it from use' }));
    expect(sent()).toEqual([{ method: 'PATCH', path: '/api/tools/w1', body: { state: 'withdrawn' } }]);
  });
});

describe('entering a calibration', () => {
  it('judges the readings as they are typed and sends them without a verdict', async () => {
    const created = { status: 201, body: { id: 'c2' } };
    const { sent, user } = await show({}, { more: { 'POST /api/tools/w1/calibrations': created } });
    await user.type(screen.getByLabelText('Certificate'), ' C-2 ');
    fill(['20,1', '60']);
    expect(screen.getByText('there are no readings at 100 N·m, its largest torque')).toBeVisible();
    fill(['99.0'], 3);
    expect(screen.getByText('It passes')).toBeVisible();
    await user.click(screen.getByRole('button', { name: 'Record the calibration' }));
    const [asked] = sent();
    const body = asked?.body as Record<string, unknown>;
    expect(asked?.path).toBe('/api/tools/w1/calibrations');
    expect(Object.keys(body).sort()).toEqual(['certificate', 'dueOn', 'on', 'readings']);
    expect(body.certificate).toBe('C-2');
    expect(body.readings).toHaveLength(15);
    expect((body.readings as unknown[])[0]).toEqual({ set: '20', reference: '20.1', unit: 'N·m' });
  });

  it('says so before a calibration that fails is recorded', async () => {
    await show();
    fill(['20', '60', '90']);
    expect(screen.getByText('As it stands it does not pass')).toBeVisible();
    expect(screen.getByText(/at 100 N·m 5 of 5 are off by more than ± 4 %/)).toBeVisible();
    expect(screen.getByRole('button', { name: 'Record that it did not pass' })).toBeVisible();
  });

  it('sends nothing while a cell holds what is no reading', async () => {
    const { sent, user } = await show();
    await user.type(screen.getByLabelText('Certificate'), 'C-2');
    await user.type(cell(1, 1), 'x');
    expect(cell(1, 1)).toHaveAttribute('aria-invalid', 'true');
    expect(screen.getByText(/One cell holds something that is no reading/)).toBeVisible();
    await user.click(screen.getByRole('button', { name: 'Record the calibration' }));
    expect(sent()).toEqual([]);
  });

  it('keeps what was typed when the server refuses', async () => {
    const refusal = refused(400, 'A calibration is entered once it was made.', 'on');
    const { user } = await show({}, { more: { 'POST /api/tools/w1/calibrations': refusal } });
    await user.type(screen.getByLabelText('Certificate'), 'C-2');
    await user.click(screen.getByRole('button', { name: 'Record the calibration' }));
    expect(await screen.findByText('A calibration is entered once it was made.')).toBeVisible();
    expect(screen.getByLabelText('Certificate')).toHaveValue('C-2');
  });

  it('waits for the type and class of a torque wrench', async () => {
    await show({ torqueType: null, torqueClass: null });
    expect(screen.getByText('Its readings can’t be judged yet')).toBeVisible();
    expect(screen.queryByLabelText('Certificate')).not.toBeInTheDocument();
  });
});
