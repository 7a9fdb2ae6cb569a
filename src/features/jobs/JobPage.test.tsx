import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it } from 'vitest';
import type { EntryOf } from '@/domain/entry';
import { photosOf } from '@/domain/job-photos';
import { progressOf } from '@/domain/job-progress';
import { nextSteps } from '@/domain/job';
import { answerDesk, refused, type DeskAnswer } from '../../../tests/support/desk-server';
import { Journal } from '../../../tests/support/journal';
import { smallPlan } from '../../../tests/support/small-documents';
import { JobPage } from './JobPage';
import type { JobAnswer } from './job-answer';

const people = [
  { id: 'tech', name: 'T. Nician', roles: ['technician'], active: true },
  { id: 'mate', name: 'M. Ate', roles: ['technician'], active: true },
  { id: 'gone', name: 'G. One', roles: ['technician'], active: false },
  { id: 'audit', name: 'A. Uditor', roles: ['auditor'], active: true },
];

function answerOf(journal: Journal, over: Partial<JobAnswer> = {}): JobAnswer {
  const { state } = journal;
  const [next] = nextSteps(state);
  const progress = progressOf(state);
  return {
    id: 'job-1',
    number: '0147',
    label: 'Testwell T4',
    engine: 'Testwell T4',
    registration: 'TW71 ABC',
    state: 'open',
    phase: state.phase,
    openedAt: state.openedAt ?? '',
    people: [{ id: 'tech', name: 'T. Nician' }],
    done: 0,
    total: 0,
    at: state.plan.phases.find(({ id }) => id === next?.phase)?.name,
    next: next && { step: next.id, title: next.title },
    waiting: nextSteps(state).flatMap((step) =>
      step.kind === 'hold' ? [{ step: step.id, holdPoint: step.holdPoint, title: step.title }] : [],
    ),
    blocks: 0,
    working: state.working && { name: state.working.name, since: state.working.since },
    lastAt: state.lastAt,
    openedBy: { id: 'sup', name: 'S. Visor' },
    optionWords: [],
    progress,
    identity: { registration: 'TW71 ABC' },
    withheld: ['customerName'],
    missingPhotographs: [],
    photographsElsewhere: [],
    tablets: [],
    jobState: state,
    ...over,
  };
}

async function show(answer: JobAnswer, more: Record<string, DeskAnswer> = {}, canAssign = true) {
  const server = answerDesk({
    'GET /api/jobs/job-1': { body: answer },
    'GET /api/workshop': { body: { people } },
    'GET /api/jobs/job-1/set-aside': { body: { setAside: [] } },
    ...more,
  });
  render(<JobPage job="job-1" zone="Europe/Lisbon" canAssign={canAssign} canRun canReadTrail />);
  await screen.findByRole('heading', { level: 1 });
  return server;
}

function part(title: string) {
  return within(screen.getByRole('heading', { name: title }).closest('section')!);
}

describe('the page of a job', () => {
  it('says of each phase how far it is, and which one is now', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.turn-to@stop2');
    await show(answerOf(journal));
    const phases = within(screen.getByRole('list', { name: 'Phases' })).getAllByRole('listitem');
    const progress = progressOf(journal.state);
    expect(phases).toHaveLength(progress.length);
    for (const [i, { name, done, total }] of progress.entries())
      expect(phases[i]).toHaveTextContent(`${name}${done} of ${total}`);
    expect(phases.filter((phase) => phase.getAttribute('aria-current') === 'step')).toHaveLength(1);
  });

  it('says of a new job that nothing blocks it, what comes first, and that nobody is at work', async () => {
    const journal = new Journal(smallPlan());
    await show(answerOf(journal));
    expect(screen.getByText('Nothing blocks it.')).toBeVisible();
    const [first] = part('What comes next').getAllByRole('listitem');
    expect(first).toHaveTextContent(nextSteps(journal.state)[0]!.title);
    expect(part('Who works on it').getByText('nobody')).toBeVisible();
  });

  it('says which signature is due, and where it is given', async () => {
    const plan = smallPlan();
    const hold = plan.steps.find(({ kind }) => kind === 'hold')!;
    const journal = new Journal(plan).performUntil(hold.id);
    await show(answerOf(journal));
    expect(part('What blocks it').getByText(/^Signature due: /)).not.toHaveTextContent('Hold point');
    expect(part('What blocks it').getByText('at the vehicle, on the Floor')).toBeVisible();
  });

  it('says of an open deviation its class, its words, who raised it and when', async () => {
    const journal = new Journal(smallPlan());
    journal.record('deviation-raised', { class: 'A', words: 'a crack in the cap', blocks: true });
    await show(answerOf(journal));
    const blocks = part('What blocks it');
    expect(blocks.getByText('Deviation, class A: a crack in the cap')).toBeVisible();
    expect(blocks.getByText('T. Nician, 2 Jun, 09:00')).toBeVisible();
  });

  it('says nothing of the old shells before they are graded', async () => {
    await show(answerOf(new Journal(smallPlan()).performUntil('strip.grade')));
    expect(screen.queryByRole('heading', { name: 'Wear of the old shells' })).toBeNull();
  });

  it('has the map of the old shells in words, and what it points to as a hint', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.grade');
    journal.grade('strip.grade', {
      '1L': { grade: 2 },
      '2L': { grade: 2, flags: ['heat'] },
      '3L': { grade: 1 },
      '4L': { grade: 3 },
    });
    await show(answerOf(journal));
    const wear = part('Wear of the old shells');
    const map = within(wear.getByRole('table', { name: /^Wear of the old shells, front at the left/ }));
    expect(map.getAllByRole('columnheader').map(({ textContent }) => textContent)).toEqual([
      'Half',
      'Rod 1',
      'Rod 2',
      'Rod 3',
      'Rod 4',
    ]);
    const lower = within(map.getByRole('row', { name: /^Lower/ })).getAllByRole('cell');
    expect(lower.map(({ textContent }) => textContent)).toEqual([
      '1L, worn to the next layer',
      '2L, worn to the next layer, heat',
      '3L, fine lines',
      '4L, copper showing',
    ]);
    expect(wear.getByText('Worst: copper showing')).toBeVisible();
    expect(wear.getByText('Mean grade: uppers 0.0, lowers 2.0')).toBeVisible();
    expect(wear.getByText(/^Deviation, class B, open: Old shells to look at/)).toHaveTextContent(
      '2L worn to the next layer, heat; 4L copper showing. Nothing waits for it.',
    );
    expect(wear.getByText(/^The lower shells are worn more than the upper ones: commonly/)).toBeVisible();
    expect(wear.getByText(/^Heat at 2L: commonly/)).toBeVisible();
    expect(wear.getByText(/A hint for whoever looks further, never a verdict/)).toHaveTextContent(
      'by T. Nician, 2 Jun, ',
    );
  });

  it('says who looked at the pins of worn shells, and what came of it', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.grade');
    journal.grade('strip.grade', { '4L': { grade: 3 } });
    journal.acceptLast('The pin is smooth.');
    await show(answerOf(journal));
    const line = part('Wear of the old shells').getByText(/^Deviation, class B, accept as is by S. Visor/);
    expect(line).toHaveTextContent('with their pins: 4L copper showing. The pin is smooth.');
  });

  it('shows the grades as they were corrected, and by whom', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.grade');
    const { id, data } = journal.grade('strip.grade', {}) as EntryOf<'graded'>;
    const shells = data.shells.map((shell) => ({ ...shell, grade: 1 as const }));
    journal.record(
      'corrected',
      { of: id, class: 'substantive', reason: 'better light', data: { shells } },
      { by: 'sup', step: 'strip.grade' },
    );
    await show(answerOf(journal));
    const wear = part('Wear of the old shells');
    expect(wear.getByText(/nothing stands out/)).toBeVisible();
    expect(wear.getByText(/by S. Visor, 2 Jun, .*, as corrected\./)).toBeVisible();
  });

  it('has the signatures as stamps, and says of one whose PIN is unchecked what to do', async () => {
    const plan = smallPlan();
    const hold = plan.steps.find(({ kind }) => kind === 'hold')!;
    const journal = new Journal(plan).performUntil(hold.id);
    journal.sign(hold.id, { checked: false });
    await show(answerOf(journal));
    expect(part('Signed').getByText('SIGNED, TO BE CHECKED')).toBeVisible();
    expect(part('Signed').getByText('S. Visor')).toBeVisible();
    expect(part('What blocks it').getByText('bring the tablet to the network')).toBeVisible();
  });

  it('shows the photographs of the record, and not one that was taken back', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.turn-to@stop2');
    const photo = journal.entries.find(({ kind }) => kind === 'photographed')!;
    await show(answerOf(journal));
    const subject = photo.kind === 'photographed' ? photo.data.subject : '';
    expect(screen.getByRole('img', { name: subject })).toHaveAttribute(
      'src',
      `/api/photos/${'b'.repeat(64)}?size=thumb`,
    );
  });

  it('says how the clearances lie together, and how sure the least sure one is', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.turn-to@stop2');
    await show(answerOf(journal));
    const clearances = part('Oil clearance');
    expect(clearances.getByText(/readings: mean/)).toHaveTextContent(
      /^4 readings: mean 0\.0480 mm, spread 0\.000 mm, standard deviation 0\.0000 mm\.$/,
    );
    expect(clearances.getByText(/Least sure/)).toHaveTextContent(
      /inside its limits with a probability of more than 99\.9 %\. The verdict is by its guard bands, not by this\.$/,
    );
  });

  it('shows no photograph that was taken back', async () => {
    const journal = new Journal(smallPlan());
    const photo = journal.record('photographed', {
      photo: 'c'.repeat(64),
      bytes: 10,
      type: 'image/jpeg',
      from: 'camera here',
      subject: 'a thumb',
    });
    journal.record('taken-back', { of: photo.id, which: 'touched by mistake, not done', reason: 'blurred' });
    await show(answerOf(journal));
    expect(screen.queryByRole('img', { name: 'a thumb' })).not.toBeInTheDocument();
    expect(part('Photographs').getByText('None yet.')).toBeVisible();
  });

  it('says of a photograph that has not come where it is, and how a lost one is got out of', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.turn-to@stop2');
    const [photo] = photosOf(journal.state);
    const missing = {
      entry: photo!.entry,
      name: 'photograph bbbbbbbb',
      subject: photo!.subject,
      at: photo!.at,
      tablet: 'Bay 2',
    };
    await show(answerOf(journal, { missingPhotographs: [{ ...missing, isAwaited: true }] }));
    const blocks = part('What blocks it');
    expect(blocks.getByText(`Handover waits for a photograph: ${photo!.subject}`)).toBeVisible();
    expect(blocks.getByText(/on Bay 2: bring it to the network/)).toHaveTextContent(/^photograph bbbbbbbb/);
    expect(blocks.getByText(/Take it again at its step on the Floor/)).toHaveTextContent(
      'raise a deviation that names it (photograph bbbbbbbb)',
    );
    expect(part('Photographs').getByText('not here yet, on Bay 2')).toBeVisible();
    expect(screen.queryByRole('img', { name: photo!.subject })).not.toBeInTheDocument();
  });

  it('points out a picture that stands for something else too, here or in other jobs', async () => {
    const journal = new Journal(smallPlan());
    const hash = 'd'.repeat(64);
    const data = { photo: hash, bytes: 10, type: 'image/jpeg', from: 'from file' } as const;
    journal.record('photographed', { ...data, subject: 'shells of rod 1' });
    journal.record('photographed', { ...data, subject: 'shells of rod 2' });
    journal.record('photographed', { ...data, photo: 'e'.repeat(64), subject: 'the sump' });
    await show(
      answerOf(journal, {
        photographsElsewhere: [{ hash, jobs: [{ id: 'j2', number: '31-002' }], others: 2 }],
      }),
    );
    const photographs = part('Photographs');
    const [first] = photographs.getAllByText(/The same picture/);
    expect(first).toHaveTextContent(
      'The same picture stands here for “shells of rod 2” and is in job 31-002 and is in 2 other jobs',
    );
    expect(photographs.getAllByText(/The same picture/)).toHaveLength(2);
    expect(photographs.getAllByRole('link', { name: '31-002' })[0]).toHaveAttribute('href', '/jobs/j2');
  });

  it('does not say that handover waits for a photograph that was taken again', async () => {
    const journal = new Journal(smallPlan()).performUntil('strip.turn-to@stop2');
    const [photo] = photosOf(journal.state);
    const missing = { entry: photo!.entry, name: 'n', subject: 's', at: photo!.at, tablet: 'Bay 2' };
    await show(answerOf(journal, { missingPhotographs: [{ ...missing, isAwaited: false }] }));
    expect(screen.queryByText(/Handover waits/)).not.toBeInTheDocument();
    expect(part('Photographs').getByText('not here yet, on Bay 2')).toBeVisible();
  });

  it('lists what was set aside: what, by whom, from where, why, and when; the rest on asking', async () => {
    const line = { at: '2026-06-02T08:10:00.000Z', reason: 'The PIN was wrong. Sign again.' };
    const first = { ...line, id: '1', words: 'Signed the hold point', madeAt: '2026-06-02T08:00:00.000Z' };
    const path = 'GET /api/jobs/job-1/set-aside';
    await show(answerOf(new Journal(smallPlan())), {
      [path]: { body: { setAside: [{ ...first, by: 'S. Visor', tablet: 'Bay 2' }], cursor: 'a~b' } },
      [`${path}?cursor=a~b`]: { body: { setAside: [{ ...line, id: '2', words: 'Unreadable' }] } },
    });
    await screen.findByRole('heading', { name: 'Set aside' });
    const list = part('Set aside');
    const [one] = list.getAllByRole('listitem');
    expect(one).toHaveTextContent('Signed the hold point');
    expect(one).toHaveTextContent('The PIN was wrong. Sign again.');
    expect(one).toHaveTextContent('S. Visor, 2 Jun, 09:00, on Bay 2; set aside 2 Jun, 09:10');
    await userEvent.click(list.getByRole('button', { name: 'Older ones' }));
    expect(await list.findByText('Unreadable')).toBeVisible();
    expect(list.getByText(/nobody that the workshop knows, from a tablet that is not proved/)).toBeVisible();
  });

  it('has no list of what was set aside where nothing was', async () => {
    await show(answerOf(new Journal(smallPlan())));
    expect(screen.queryByRole('heading', { name: 'Set aside' })).not.toBeInTheDocument();
  });

  it('says what is kept from this role, and leaves out what nobody gave', async () => {
    await show(answerOf(new Journal(smallPlan())));
    const facts = part('Vehicle and agreement');
    expect(facts.getByText('Customer').nextSibling).toHaveTextContent('kept from this role');
    expect(facts.queryByText('Telephone')).not.toBeInTheDocument();
  });

  it('says that the engine of a job ended unfinished is not to be run', async () => {
    const journal = new Journal(smallPlan());
    const data = { reason: 'the block is cracked', open: ['sump'], notToBeRun: true as const };
    journal.record('ended-unfinished', data, { by: 'sup' });
    await show(answerOf(journal, { phase: 'ended unfinished', state: 'ended' }));
    expect(screen.getByText('Ended unfinished. The engine is not to be run.')).toBeVisible();
    expect(screen.getByText(/^Ended by S. Visor, 2 Jun, .*: the block is cracked\.$/)).toBeVisible();
    expect(screen.getByText('Left open: sump.')).toBeVisible();
    expect(part('What blocks it').getByText('Nothing: the job is over.')).toBeVisible();
  });

  it('says of a parked job who made it safe, when and why, and how it goes on', async () => {
    const plan = smallPlan();
    const safe = plan.steps.find(({ kind }) => kind === 'make-safe');
    if (safe?.kind !== 'make-safe') throw new Error('the small job can be parked');
    const journal = new Journal(plan);
    const checks = safe.checks.map(({ id }) => ({ id, ok: true }));
    journal.record('parked', { checks, note: 'waits for shells' }, { step: safe.id });
    await show(answerOf(journal, { state: 'parked' }));
    expect(screen.getByText(/^Parked, made safe by T. Nician, 2 Jun, /)).toBeVisible();
    expect(screen.getByText('waits for shells')).toBeVisible();
    expect(screen.getByText(/^It is resumed on the Floor/)).toBeVisible();
    expect(part('What blocks it').getByText('Only that it is parked.')).toBeVisible();
  });

  it('says what the server said when the job does not come', async () => {
    answerDesk({ 'GET /api/jobs/job-1': refused(404, 'No such job.') });
    render(<JobPage job="job-1" zone="Europe/Lisbon" canAssign canRun canReadTrail />);
    const note = await screen.findByRole('alert', undefined, { timeout: 5000 });
    expect(note).toHaveTextContent('No such job.The job is as it was.');
  });
});

describe('who is on a job', () => {
  const journal = new Journal(smallPlan());

  it('can be changed among technicians and supervisors who are at work', async () => {
    const { requests } = await show(answerOf(journal), {
      'POST /api/jobs/job-1/people': { body: { ok: true } },
    });
    await userEvent.click(screen.getByRole('button', { name: 'Change who is on it' }));
    await userEvent.click(await screen.findByLabelText('M. Ate, technician'));
    expect(screen.getByLabelText('T. Nician, technician')).toBeChecked();
    expect(screen.queryByLabelText(/G\. One|A\. Uditor/)).not.toBeInTheDocument();
    await userEvent.click(screen.getByRole('button', { name: 'Keep' }));
    expect(await screen.findByRole('button', { name: 'Change who is on it' })).toBeVisible();
    const sent = requests.find(({ method }) => method === 'POST');
    expect(sent?.body).toEqual({ people: ['tech', 'mate'] });
  });

  it('stays as chosen on the screen when the server refuses, with its words', async () => {
    await show(answerOf(journal), {
      'POST /api/jobs/job-1/people': refused(400, 'The workshop has no such person at work.'),
    });
    await userEvent.click(screen.getByRole('button', { name: 'Change who is on it' }));
    await userEvent.click(await screen.findByLabelText('M. Ate, technician'));
    await userEvent.click(screen.getByRole('button', { name: 'Keep' }));
    const note = await screen.findByRole('alert');
    expect(note).toHaveTextContent('The workshop has no such person at work.');
    expect(note).toHaveTextContent('Nobody was changed');
    expect(screen.getByLabelText('M. Ate, technician')).toBeChecked();
  });

  it('is not for everybody to change', async () => {
    await show(answerOf(journal), {}, false);
    expect(screen.queryByRole('button', { name: 'Change who is on it' })).not.toBeInTheDocument();
  });
});
