import { QueryClientProvider } from '@tanstack/react-query';
import { render, screen, waitFor } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it } from 'vitest';
import { newQueryClient } from '@/offline/use-server';
import { answerDesk, refused, type DeskAnswer } from '../../../tests/support/desk-server';
import { Journal } from '../../../tests/support/journal';
import { smallPlan } from '../../../tests/support/small-documents';
import type { JobAnswer } from './job-answer';
import { JobErasure } from './JobErasure';

const user = userEvent.setup();

function show(identity: Record<string, string>, answer: DeskAnswer = { body: { ok: true } }) {
  const server = answerDesk({ 'POST /api/jobs/job-1/erase': answer });
  const { state } = new Journal(smallPlan());
  const job = { id: 'job-1', identity, jobState: state } as unknown as JobAnswer;
  render(
    <QueryClientProvider client={newQueryClient()}>
      <JobErasure job={job} />
    </QueryClientProvider>,
  );
  return server;
}

describe('erasing personal data', () => {
  it('asks for a reason, and erases just what is ticked', async () => {
    const { requests } = show({ customerName: 'A. Customer', vin: 'TEST0000000000001' });
    await user.click(screen.getByRole('button', { name: 'Erase personal data' }));
    const erase = screen.getByRole('button', { name: 'Erase for good' });
    expect(erase).toBeDisabled();
    await user.click(screen.getByRole('checkbox', { name: 'VIN' }));
    await user.type(screen.getByRole('textbox', { name: 'Reason' }), 'asked for');
    await user.click(erase);
    await waitFor(() => expect(screen.queryByRole('dialog')).not.toBeInTheDocument());
    expect(requests.map(({ body }) => body)).toEqual([
      { fields: ['customerName'], photographs: [], reason: 'asked for' },
    ]);
  });

  it('says why nothing was erased', async () => {
    show({ customerName: 'A. Customer' }, refused(409, 'The job is still running.'));
    await user.click(screen.getByRole('button', { name: 'Erase personal data' }));
    await user.type(screen.getByRole('textbox', { name: 'Reason' }), 'asked for');
    await user.click(screen.getByRole('button', { name: 'Erase for good' }));
    expect(await screen.findByText(/The job is still running/)).toBeVisible();
    expect(screen.getByText(/Nothing was erased/)).toBeVisible();
  });

  it('is not offered where nothing is left to erase', () => {
    show({});
    expect(screen.queryByRole('button')).not.toBeInTheDocument();
  });
});
