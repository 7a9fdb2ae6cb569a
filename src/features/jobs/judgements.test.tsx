import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { act, render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { beforeEach, describe, expect, it, vi } from 'vitest';
import type { DeskOutcome, KeptHere, watchKept as WatchKept } from '@/offline/desk-record';
import { Journal } from '../../../tests/support/journal';
import { smallPlan } from '../../../tests/support/small-documents';
import { JobCorrections } from './JobCorrections';
import { JobKept } from './JobKept';
import { JobSignatures } from './JobSignatures';
import type { Judge } from './JudgementDialog';

const recordAtDesk = vi.hoisted(() => vi.fn<(...asked: unknown[]) => Promise<DeskOutcome>>());
const sendKept = vi.hoisted(() => vi.fn<(...asked: unknown[]) => Promise<DeskOutcome>>());
const watchKept = vi.hoisted(() => vi.fn<typeof WatchKept>());
vi.mock('@/offline/desk-record', () => ({ recordAtDesk, sendKept, watchKept }));
vi.mock('@/offline/offline', () => ({ offlineOfThisPage: () => 'this browser' }));

beforeEach(() => {
  recordAtDesk.mockReset();
  recordAtDesk.mockResolvedValue({ ok: true });
});

const lead: Judge = { job: 'job-1', id: 'lead', name: 'Q. Lead' };
const HOLD = 'build.caps-marked';

/** Signed, gone on, and a lot mended under the signature. */
function clerical(): Journal {
  const journal = new Journal(smallPlan()).performUntil('build.sump-on');
  const chosen = journal.entries.find((one) => one.kind === 'chose-shells')!;
  const data = { ...chosen.data, upper: { grade: 'blue', lot: 'S-7' } };
  journal.record('corrected', { of: chosen.id, class: 'clerical', reason: 'misread label', data });
  return journal;
}

function show(journal: Journal, judge: Judge | null = lead) {
  const parts = { state: journal.state, zone: 'Europe/Lisbon', judge: judge ?? undefined };
  render(
    <QueryClientProvider client={new QueryClient()}>
      <JobCorrections {...parts} />
      <JobSignatures {...parts} />
    </QueryClientProvider>,
  );
  return userEvent.setup();
}

const dialog = () => within(screen.getByRole('dialog'));

describe('a clerical correction under a signature', () => {
  it('is countersigned with a PIN by somebody else, who sees what it changed', async () => {
    const journal = clerical();
    const user = show(journal);
    expect(screen.getByText('Countersign due before handover')).toBeVisible();
    await user.click(screen.getByRole('button', { name: 'Countersign' }));
    expect(dialog().getByText(/lot S-7/)).toBeVisible();
    expect(dialog().getByText(/Corrected by T. Nician, .*: misread label/)).toBeVisible();
    const sign = dialog().getByRole('button', { name: 'Countersign' });
    expect(sign).toBeDisabled();
    await user.type(dialog().getByLabelText('Your PIN'), '604392');
    await user.click(sign);
    const of = journal.entries.at(-1)!.id;
    const data = { of, name: 'Q. Lead' };
    expect(recordAtDesk).toHaveBeenCalledWith(
      'this browser',
      'job-1',
      { kind: 'countersigned', data, pin: '604392' },
      'lead',
    );
    expect(screen.queryByRole('dialog')).toBeNull();
  });

  it('offers nothing to whoever made it, and says why', () => {
    show(clerical(), { ...lead, id: 'tech' });
    expect(screen.queryByRole('button', { name: 'Countersign' })).toBeNull();
    expect(screen.getByText(/Nobody countersigns their own correction/)).toBeVisible();
  });

  it('stays open with the words when it was refused', async () => {
    recordAtDesk.mockResolvedValue({ ok: false, code: 'pin-wrong', why: 'The PIN was wrong. Sign again.' });
    const user = show(clerical());
    await user.click(screen.getByRole('button', { name: 'Countersign' }));
    await user.type(dialog().getByLabelText('Your PIN'), '111111');
    await user.click(dialog().getByRole('button', { name: 'Countersign' }));
    expect(dialog().getByText(/The PIN was wrong/)).toBeVisible();
    expect(dialog().getByLabelText('Your PIN')).toHaveValue('');
  });
});

describe('a judgement that the server was not reached with', () => {
  it('is kept, says so, and is sent again without being signed again', async () => {
    const kept = { ok: false, code: 'kept', why: 'The server was not reached.', kept: ['entry-1'] } as const;
    recordAtDesk.mockResolvedValue({ ...kept, kept: [...kept.kept] });
    sendKept.mockResolvedValueOnce({ ...kept, kept: [...kept.kept] }).mockResolvedValueOnce({ ok: true });
    const user = show(clerical());
    await user.click(screen.getByRole('button', { name: 'Countersign' }));
    await user.type(dialog().getByLabelText('Your PIN'), '604392');
    await user.click(dialog().getByRole('button', { name: 'Countersign' }));
    expect(dialog().getByRole('alert')).toHaveTextContent('Signed, and kept in this browser');
    expect(dialog().queryByLabelText('Your PIN')).toBeNull();
    await user.click(dialog().getByRole('button', { name: 'Send it now' }));
    expect(dialog().getByRole('alert')).toHaveTextContent('The server was not reached.');
    await user.click(dialog().getByRole('button', { name: 'Send it now' }));
    expect(screen.queryByRole('dialog')).toBeNull();
    expect(sendKept).toHaveBeenCalledWith('this browser', 'job-1', ['entry-1']);
    expect(recordAtDesk).toHaveBeenCalledOnce();
  });

  it('is told of on the page of its job until it is on the record, and why it waits', () => {
    let tell: (kept: KeptHere) => void = () => undefined;
    watchKept.mockImplementation((_offline, _job, telling) => {
      tell = telling;
      return () => undefined;
    });
    const client = new QueryClient();
    const asksAgain = vi.spyOn(client, 'invalidateQueries');
    render(
      <QueryClientProvider client={client}>
        <JobKept job="job-1" />
      </QueryClientProvider>,
    );
    expect(screen.queryByRole('alert')).toBeNull();
    act(() => tell({ count: 1, reason: 'Your PIN is locked for 15 minutes.' }));
    expect(screen.getByRole('alert')).toHaveTextContent('1 entry is signed and kept in this browser');
    expect(screen.getByRole('alert')).toHaveTextContent('Your PIN is locked for 15 minutes.');
    expect(asksAgain).not.toHaveBeenCalled();
    act(() => tell({ count: 0 }));
    expect(screen.queryByRole('alert')).toBeNull();
    expect(asksAgain).toHaveBeenCalledOnce();
  });
});

describe('a value that was corrected to inside its limits', () => {
  it('is countersigned with the earlier value and its deviation in sight', async () => {
    const step = 'strip.gauge@rod2';
    const journal = new Journal(smallPlan()).performUntil(step).gauge(step, '0.800', '0.800');
    const { id: of, data } = journal.entries.findLast((one) => one.kind === 'gauged')!;
    const better = { ...data, clearance: '0.050' };
    journal.record('corrected', { of, class: 'substantive', reason: 'misread', data: better });
    const user = show(journal);
    expect(screen.getByText('Countersign due: the deviation stays open until then')).toBeVisible();
    await user.click(screen.getByRole('button', { name: 'Countersign' }));
    expect(dialog().getByText(/Before: Rod 2, rear: 0\.800 mm is outside the limits\./)).toBeVisible();
    expect(dialog().getByText(/Now: Rod 2, rear: 0\.050 mm/)).toBeVisible();
  });
});

describe('a signature or a disposition', () => {
  it('is revoked with a reason', async () => {
    const journal = new Journal(smallPlan()).performUntil(HOLD);
    const { id } = journal.sign(HOLD);
    const user = show(journal);
    await user.click(screen.getAllByRole('button', { name: 'Revoke' })[0]!);
    const revoke = dialog().getByRole('button', { name: 'Revoke it' });
    expect(revoke).toBeDisabled();
    await user.type(dialog().getByLabelText('Reason'), 'the wrong vehicle');
    await user.click(revoke);
    expect(recordAtDesk).toHaveBeenCalledWith(
      'this browser',
      'job-1',
      { kind: 'revoked', data: { of: id, reason: 'the wrong vehicle' } },
      'lead',
    );
  });

  it('names the disposition that is revoked', async () => {
    const journal = new Journal(smallPlan()).performUntil(HOLD);
    const disposed = journal.state.deviations.find((one) => one.disposed)!;
    const user = show(journal);
    const line = within(screen.getAllByText(disposed.words)[0]!.closest('li')!);
    await user.click(line.getByRole('button', { name: 'Revoke' }));
    await user.type(dialog().getByLabelText('Reason'), 'looked at again');
    await user.click(dialog().getByRole('button', { name: 'Revoke it' }));
    expect(recordAtDesk.mock.calls[0]?.[2]).toEqual({
      kind: 'revoked',
      data: { of: disposed.disposed!.entry, reason: 'looked at again' },
    });
  });

  it('is not offered for revoking to somebody who may not', () => {
    const journal = new Journal(smallPlan()).performUntil(HOLD);
    journal.sign(HOLD);
    show(journal, null);
    expect(screen.queryByRole('button', { name: 'Revoke' })).toBeNull();
  });

  it('that was opened again says how many steps were done past it', () => {
    const journal = new Journal(smallPlan()).performUntil('build.sump-on');
    const { entry } = journal.state.signatures.find(({ step }) => step === HOLD)!;
    journal.record('revoked', { of: entry, reason: 'the wrong vehicle' }, { by: 'lead' });
    show(journal);
    expect(screen.getByText(/steps were done past a hold point that was opened again/)).toBeVisible();
    expect(screen.getByText('not signed again yet')).toBeVisible();
  });
});
