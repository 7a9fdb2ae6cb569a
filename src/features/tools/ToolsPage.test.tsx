import { render, screen, waitFor, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it, vi } from 'vitest';
import { answerDesk } from '../../../tests/support/desk-server';
import { ToolsPage } from './ToolsPage';

const wrench = {
  ...{ id: 'w1', name: 'Long wrench', kind: 'torque wrench', serial: 'TW-1' },
  ...{ rangeLow: '20', rangeHigh: '100', unit: 'N·m', dueOn: '2099-05-31', state: 'in use' },
  ...{ cycleLimit: 5000, cyclesUsed: 812, torqueType: 'II', torqueClass: 'A', failure: null },
};
const tools = [
  wrench,
  { ...wrench, id: 'w2', name: 'Old wrench', dueOn: '2020-01-31' },
  { ...wrench, id: 'w3', name: 'Spare wrench', state: 'withdrawn' },
];

async function show(show: 'all' | 'due' | 'past' = 'all', canChange = true) {
  const path = show === 'all' ? '/api/tools' : `/api/tools?show=${show}`;
  const server = answerDesk({
    [`GET ${path}`]: { body: { tools } },
    'POST /api/tools': { status: 201, body: { id: 'new' } },
  });
  const goTo = vi.fn();
  render(<ToolsPage zone="Europe/Lisbon" canChange={canChange} show={show} goTo={goTo} />);
  await screen.findByText('Long wrench');
  return {
    goTo,
    user: userEvent.setup(),
    sent: () => server.requests.filter(({ method }) => method !== 'GET'),
  };
}

const row = (name: string) => screen.getByText(name).closest('tr')!;

describe('the page of tools', () => {
  it('tells of each its kind, class, serial, range, date and how it stands', async () => {
    await show();
    for (const words of [
      'torque wrench',
      'type II, class A',
      'TW-1',
      '20 to 100 N·m',
      '31 May 2099',
      'in date',
    ]) {
      expect(row('Long wrench')).toHaveTextContent(words);
    }
    expect(row('Old wrench')).toHaveTextContent('its calibration counted until 2020-01-31');
    expect(row('Spare wrench')).toHaveTextContent('withdrawn');
    expect(within(row('Long wrench')).getByRole('link')).toHaveAttribute('href', '/tools/w1');
  });

  it('asks the server for those that are due or past', async () => {
    await show('due');
    expect(screen.getByRole('link', { name: 'Due soon' })).toHaveAttribute('aria-current', 'page');
  });

  it('offers no way to add one to those who may only read', async () => {
    await show('all', false);
    expect(screen.queryByRole('button', { name: 'Add a tool' })).not.toBeInTheDocument();
  });

  it('adds a tool with its facts, those of a torque tool only where it is one', async () => {
    const { user, sent, goTo } = await show();
    await user.click(screen.getByRole('button', { name: 'Add a tool' }));
    const dialog = within(screen.getByRole('dialog', { name: 'Add a tool' }));
    await user.type(dialog.getByLabelText('Name'), 'Gauge');
    await user.type(dialog.getByLabelText('Serial number'), 'G-1');
    await user.selectOptions(dialog.getByLabelText('Type by ISO 6789'), 'II');
    await user.selectOptions(dialog.getByLabelText('Kind'), 'micrometer');
    expect(dialog.queryByLabelText('Type by ISO 6789')).not.toBeInTheDocument();
    await user.selectOptions(dialog.getByLabelText('Marked in'), 'mm');
    await user.type(dialog.getByLabelText(/Largest value/), 'fifty');
    await user.click(dialog.getByRole('button', { name: 'Add the tool' }));
    expect(dialog.getByText('A figure, such as 12.5.')).toBeVisible();
    expect(sent()).toEqual([]);
    await user.clear(dialog.getByLabelText(/Largest value/));
    await user.type(dialog.getByLabelText(/Largest value/), '50,0');
    await user.click(dialog.getByRole('button', { name: 'Add the tool' }));
    expect(sent()[0]?.body).toEqual({
      ...{ name: 'Gauge', kind: 'micrometer', serial: 'G-1', unit: 'mm', rangeLow: null, rangeHigh: '50.0' },
      ...{ torqueType: null, torqueClass: null, cycleLimit: null },
    });
    await waitFor(() => expect(goTo).toHaveBeenCalledWith('/tools/new'));
  });
});
