import { createHmac } from 'node:crypto';
import { render, screen, waitFor } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { beforeEach, describe, expect, it, vi } from 'vitest';
import type { Entry } from '@/domain/entry';
import { openOffline } from '@/offline/offline';
import { enrolAuthorKey, enrolTablet, rememberSignIn, setWorking } from '@/offline/tablet';
import { refused } from '../../../tests/support/desk-server';
import { must } from '../../../tests/support/offline-tablet';
import { OfflineServer } from '../../../tests/support/offline-server';
import { NewJobForm } from './NewJobForm';

interface Opening {
  entry: Entry & { kind: 'opened' };
  signature: string;
  identity: Record<string, { value: string; salt: string }>;
  people: string[];
}

const routes = [
  {
    id: 'test-route',
    name: 'Bearings, Testwell T4',
    engine: { name: 'Testwell T4', code: 'T4' },
    options: [{ id: 'plate', ask: 'Is a plate fitted?', choices: [{ id: 'fitted', label: 'fitted' }] }],
  },
];
const people = [{ id: 'tech', name: 'T. Nician', roles: ['technician'], active: true }];
const prepared = { number: '0148', plan: 'a'.repeat(64), planBody: { engine: { name: 'Testwell T4' } } };

type Post = (body: Opening) => { status?: number; body: unknown } | 'lost';

/** A desk browser on which the supervisor is ready to sign, and a server that opens jobs as told. */
async function showForm(post: Post) {
  const server = new OfflineServer();
  const openings: Opening[] = [];
  vi.stubGlobal('fetch', async (path: string, init: RequestInit = {}) => {
    if (path === '/api/jobs/prepare') return Response.json(prepared);
    if (path !== '/api/jobs') return server.fetch(path, init);
    const opening = JSON.parse(init.body as string) as Opening;
    openings.push(opening);
    const answer = post(opening);
    if (answer === 'lost') throw new TypeError('network error');
    return Response.json(answer.body, { status: answer.status ?? 201 });
  });
  const offline = openOffline();
  await Promise.all(offline.db.tables.map((table) => table.clear()));
  server.session = 'sup';
  must(await enrolTablet(offline, 'Desk'));
  await rememberSignIn(offline, {
    person: 'sup',
    name: 'S. Visor',
    roles: ['supervisor'],
    sessionUntil: new Date(offline.now() + 3_600_000).toISOString(),
  });
  must(await enrolAuthorKey(offline, 'sup'));
  await setWorking(offline, 'sup');
  offline.db.close();
  const goTo = vi.fn<(path: string) => void>();
  render(<NewJobForm actor="sup" routes={routes} people={people} goTo={goTo} />);
  return { openings, goTo };
}

const opened: Post = ({ entry }) => ({ body: { id: entry.job, number: '0148' } });

const TYPED = {
  Registration: 'TW71 ABC',
  Odometer: '120300',
  Name: 'Ada Testperson',
  'E-mail': 'ada@customer.example',
  'May approve extra work': 'the customer',
};

async function fill(over: Record<string, string> = {}) {
  const user = userEvent.setup();
  await user.selectOptions(screen.getByLabelText('Is a plate fitted?'), 'fitted');
  for (const [label, text] of Object.entries({ ...TYPED, ...over }))
    await user.type(screen.getByLabelText(label), text);
  return user;
}

function send() {
  return userEvent.click(screen.getByRole('button', { name: 'Open the job' }));
}

beforeEach(() => vi.unstubAllGlobals());

describe('opening a job', () => {
  it('sends a signed opening whose commitments are those of the values, and goes to the job', async () => {
    const { openings, goTo } = await showForm(opened);
    const user = await fill();
    await user.click(screen.getByLabelText('T. Nician, technician'));
    await send();
    await waitFor(() => expect(goTo).toHaveBeenCalledWith(`/jobs/${openings[0]?.entry.job}`));
    const { entry, identity, people: sentPeople } = openings[0]!;
    expect(sentPeople).toEqual(['tech']);
    expect(entry).toMatchObject({
      kind: 'opened',
      by: 'sup',
      deviceSeq: 1,
      plan: prepared.plan,
      data: { number: '0148', options: { plate: 'fitted' }, odometer: { value: '120300', unit: 'km' } },
    });
    expect(identity.registration?.value).toBe('TW71 ABC');
    expect(Object.keys(identity).sort()).toEqual(Object.keys(entry.data.commitments).sort());
    for (const [field, { value, salt }] of Object.entries(identity))
      expect(entry.data.commitments[field]).toBe(
        createHmac('sha256', Buffer.from(salt, 'hex')).update(value).digest('hex'),
      );
    // What can be erased stands nowhere in what is hashed for ever.
    expect(JSON.stringify(entry)).not.toMatch(/Ada|ada@|TW71/);
  });

  it('warns of a check digit that does not fit, and opens the job all the same', async () => {
    const { goTo } = await showForm(opened);
    await fill({ 'VIN (optional)': '1M8GDM9A0KP042788' });
    expect(screen.getByText(/^The check digit would be X\./)).toBeVisible();
    await send();
    await waitFor(() => expect(goTo).toHaveBeenCalledOnce());
  });

  it('refuses a VIN that can’t be one, and an odometer that is no number, in words at their fields', async () => {
    const { openings } = await showForm(opened);
    await fill({ 'VIN (optional)': 'TOO SHORT', Odometer: 'about 120' });
    await send();
    expect(await screen.findByText(/^A VIN has 17 characters/)).toBeVisible();
    expect(screen.getByText('Digits only, as the dial shows it.')).toBeVisible();
    expect(screen.getByLabelText('Odometer')).toHaveAccessibleDescription(/Digits only/);
    expect(openings).toHaveLength(0);
  });

  it('keeps what was typed when the server refuses, with its words', async () => {
    await showForm(() => refused(409, 'The number 0148 was given to another job.'));
    await fill();
    await send();
    const note = await screen.findByRole('alert');
    expect(note).toHaveTextContent('The number 0148 was given to another job.');
    expect(note).toHaveTextContent('what you typed is still here');
    expect(screen.getByLabelText('Registration')).toHaveValue('TW71 ABC');
  });

  it('sends the very same again when the answer was lost', async () => {
    let isLost = true;
    const { openings, goTo } = await showForm((opening) => (isLost ? 'lost' : opened(opening)));
    await fill();
    await send();
    expect(await screen.findByRole('alert')).toHaveTextContent('The server was not reached.');
    isLost = false;
    await send();
    await waitFor(() => expect(goTo).toHaveBeenCalledOnce());
    expect(openings).toHaveLength(2);
    expect(openings[1]).toEqual(openings[0]);
  });

  it('signs anew when something was changed in between', async () => {
    let isLost = true;
    const { openings, goTo } = await showForm((opening) => (isLost ? 'lost' : opened(opening)));
    const user = await fill();
    await send();
    await screen.findByRole('alert');
    isLost = false;
    await user.type(screen.getByLabelText('Note (optional)'), 'bay 2');
    await send();
    await waitFor(() => expect(goTo).toHaveBeenCalledOnce());
    expect(openings[1]?.entry.id).not.toBe(openings[0]?.entry.id);
    expect(openings[1]?.entry.data.note).toBe('bay 2');
  });
});
