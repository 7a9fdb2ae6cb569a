import { render, screen, within } from '@testing-library/react';
import { describe, expect, it } from 'vitest';
import { answerDesk, refused } from '../../../tests/support/desk-server';
import { JobsPage } from './JobsPage';
import type { JobLine } from './job-answer';

const line: JobLine = {
  id: 'job-1',
  number: '26-001',
  label: 'Testwell T4',
  engine: 'Testwell T4',
  registration: 'TW71 ABC',
  state: 'open',
  phase: 'running',
  openedAt: '2026-06-01T08:00:00.000Z',
  promisedOn: '2026-06-05',
  people: [],
  done: 12,
  total: 48,
  at: 'Measurement',
  next: { step: 'measure.gauge@rod2', title: 'Rod 2: read the thread' },
  waiting: [],
  blocks: 0,
  working: { name: 'T. Nician', since: '2026-06-02T07:30:00.000Z' },
};

async function rows(jobs: JobLine[], isOver = false): Promise<HTMLElement[]> {
  answerDesk({ 'GET /api/jobs': { body: { jobs } } });
  render(<JobsPage zone="Europe/Lisbon" canOpen isOver={isOver} />);
  return within(await screen.findByRole('table'))
    .getAllByRole('row')
    .slice(1);
}

describe('the list of jobs', () => {
  it('says of each where it stands, how far it is, who is at it since when, and when it is promised', async () => {
    const [row] = await rows([line]);
    expect(
      within(row!)
        .getAllByRole('cell')
        .map(({ textContent }) => textContent),
    ).toEqual([
      '26-001',
      'TW71 ABCTestwell T4',
      'MeasurementRod 2: read the thread',
      '12/48',
      '',
      'T. Niciansince 2 Jun, 08:30',
      '5 Jun 2026',
    ]);
    expect(within(row!).getByRole('link')).toHaveAttribute('href', '/jobs/job-1');
  });

  it('says what a job waits for: signatures by name, deviations by number', async () => {
    const waiting = [{ step: 's', holdPoint: 'caps-marked', title: 'Hold point: caps marked' }];
    const [row] = await rows([{ ...line, waiting, blocks: 2 }]);
    expect(within(row!).getByText('signature: caps marked')).toBeVisible();
    expect(within(row!).getByText('2 deviations')).toBeVisible();
  });

  it('names nobody at work on a job that was only opened', async () => {
    const working = { name: 'S. Visor', since: line.openedAt };
    const [row] = await rows([{ ...line, working }]);
    expect(row).not.toHaveTextContent('S. Visor');
  });

  it('says that a registration was erased', async () => {
    const [row] = await rows([{ ...line, registration: undefined }]);
    expect(within(row!).getByText('erased')).toBeVisible();
  });

  it('keeps those that run and those that are over apart', async () => {
    const over = { ...line, id: 'job-2', number: '26-002', state: 'handed over', phase: 'handed over' };
    const shown = await rows([line, over], true);
    expect(shown).toHaveLength(1);
    expect(shown[0]).toHaveTextContent('26-002');
    expect(shown[0]).toHaveTextContent('handed over');
    expect(shown[0]).not.toHaveTextContent('T. Nician');
  });

  it('says how a job comes there while there is none', async () => {
    await rows([]);
    expect(screen.getByText('No job is in the workshop. A supervisor opens one.')).toBeVisible();
    expect(screen.getByRole('link', { name: 'Open a job' })).toHaveAttribute('href', '/jobs/new');
  });

  it('says what the server said when the list does not come', async () => {
    answerDesk({ 'GET /api/jobs': refused(403, 'You may not see jobs.') });
    render(<JobsPage zone="Europe/Lisbon" canOpen={false} isOver={false} />);
    const note = await screen.findByRole('alert', undefined, { timeout: 5000 });
    expect(note).toHaveTextContent('You may not see jobs.');
    expect(note).toHaveTextContent('No job was changed.');
  });
});
