import { fireEvent, render, screen, waitFor, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it } from 'vitest';
import { answerDesk, refused, type DeskAnswer } from '../../../tests/support/desk-server';
import { PeoplePage } from './PeoplePage';

const person = {
  ...{ active: true, hasPin: true, hasSigned: false, hasPassword: true },
  ...{ certificate: null, authorisedUntil: null },
};
const people = [
  { ...person, id: 'tech', name: 'T. Nician', roles: ['technician'], email: 'tech@workshop.example' },
  { ...person, id: 'new', name: 'N. Ew', roles: ['auditor'], hasPin: false, hasPassword: false },
  { ...person, id: 'gone', name: 'G. One', roles: ['technician'], active: false },
];

async function show(more: Record<string, DeskAnswer> = {}) {
  const server = answerDesk({
    'GET /api/people': { body: { people } },
    'GET /api/devices': { body: { devices: [] } },
    ...more,
  });
  render(<PeoplePage zone="Europe/Lisbon" />);
  await screen.findByText('T. Nician');
  const sent = () => server.requests.filter(({ method }) => method !== 'GET');
  return { sent, user: userEvent.setup() };
}

function row(name: string): HTMLElement {
  return screen.getByText(name).closest('tr')!;
}

describe('the page of people', () => {
  it('says of each what they may do and what they still lack', async () => {
    await show();
    expect(row('T. Nician')).toHaveTextContent('technician');
    expect(within(row('T. Nician')).getByText('active')).toBeVisible();
    expect(row('N. Ew')).toHaveTextContent('active, no password yet, no signing PIN yet');
    expect(row('G. One')).toHaveTextContent('deactivated: can’t sign in, stays in the record');
  });

  it('shows the rest of a long list of people and of tablets when asked', async () => {
    const device = { id: 'd1', name: 'Bay 2', state: 'active', enrolledAt: '2031-05-06T07:00:00.000Z' };
    const { user } = await show({
      'GET /api/people': { body: { people, cursor: 'G. One~gone' } },
      'GET /api/people?cursor=G.%20One~gone': {
        body: { people: [{ ...people[0], id: 'z', name: 'Z. Ed' }] },
      },
      'GET /api/devices': { body: { devices: [{ ...device, lastHeardAt: null }], cursor: 'c' } },
      'GET /api/devices?cursor=c': {
        body: { devices: [{ ...device, id: 'd2', name: 'Bay 3', lastHeardAt: null }] },
      },
    });
    await user.click(screen.getByRole('button', { name: 'More people' }));
    expect(await screen.findByText('Z. Ed')).toBeVisible();
    expect(screen.queryByRole('button', { name: 'More people' })).not.toBeInTheDocument();
    await user.click(screen.getByRole('button', { name: 'Older tablets' }));
    expect(await screen.findByText('Bay 3')).toBeVisible();
  });

  it('offers those who are deactivated nothing but the way back', async () => {
    const { sent, user } = await show({ 'PATCH /api/people/gone': { body: { ok: true } } });
    const acts = within(row('G. One')).getAllByRole('button');
    expect(acts).toHaveLength(1);
    await user.click(acts[0]!);
    expect(sent()).toEqual([{ method: 'PATCH', path: '/api/people/gone', body: { active: true } }]);
  });

  it('deactivates, and never deletes', async () => {
    const { sent, user } = await show({ 'PATCH /api/people/tech': { body: { ok: true } } });
    expect(screen.queryByRole('button', { name: /delete|remove/i })).not.toBeInTheDocument();
    await user.click(screen.getByRole('button', { name: 'Deactivate T. Nician' }));
    expect(sent()).toEqual([{ method: 'PATCH', path: '/api/people/tech', body: { active: false } }]);
  });

  it('changes roles', async () => {
    const { sent, user } = await show({ 'PATCH /api/people/tech': { body: { ok: true } } });
    await user.click(screen.getByRole('button', { name: 'Change the roles of T. Nician' }));
    const dialog = within(screen.getByRole('dialog', { name: 'Roles of T. Nician' }));
    await user.click(dialog.getByLabelText('supervisor'));
    await user.click(dialog.getByRole('button', { name: 'Keep' }));
    expect(sent()[0]?.body).toEqual({ roles: ['technician', 'supervisor'] });
  });

  it('says by what somebody signs and whether that is over', async () => {
    const certificate = { number: 'LY-MT-014', kind: 'master technician' };
    const signer = { ...people[0], certificate, authorisedUntil: '2020-03-31' };
    await show({ 'GET /api/people': { body: { people: [signer] } } });
    expect(row('T. Nician')).toHaveTextContent('LY-MT-014master technicianover since 31 Mar 2020');
  });

  it('sets a certificate with its kind, and until when it counts', async () => {
    const { sent, user } = await show({ 'PATCH /api/people/tech': { body: { ok: true } } });
    await user.click(screen.getByRole('button', { name: 'Change the authorisation of T. Nician' }));
    const dialog = within(screen.getByRole('dialog', { name: 'Authorisation of T. Nician' }));
    await user.type(dialog.getByLabelText(/^Certificate/), ' LY-MT-014 ');
    fireEvent.change(dialog.getByLabelText(/^May sign until/), { target: { value: '2031-12-31' } });
    await user.click(dialog.getByRole('button', { name: 'Keep' }));
    expect(await dialog.findByText(/Certificate and kind go together/)).toBeVisible();
    expect(sent()).toEqual([]);
    await user.type(dialog.getByLabelText(/^Kind/), 'master technician');
    await user.click(dialog.getByRole('button', { name: 'Keep' }));
    await waitFor(() => expect(sent()).toHaveLength(1));
    const certificate = { number: 'LY-MT-014', kind: 'master technician' };
    expect(sent()[0]?.body).toEqual({ authorisation: { certificate, authorisedUntil: '2031-12-31' } });
  });

  it('does not let anybody be left without a role', async () => {
    const { sent, user } = await show();
    await user.click(screen.getByRole('button', { name: 'Change the roles of T. Nician' }));
    const dialog = within(screen.getByRole('dialog', { name: 'Roles of T. Nician' }));
    await user.click(dialog.getByLabelText('technician'));
    await user.click(dialog.getByRole('button', { name: 'Keep' }));
    expect(sent()).toEqual([]);
  });

  it('says in the server’s words why a change was refused', async () => {
    const why = 'The workshop needs one owner at least.';
    const { user } = await show({ 'PATCH /api/people/tech': refused(409, why) });
    await user.click(screen.getByRole('button', { name: 'Deactivate T. Nician' }));
    const note = await screen.findByRole('alert');
    expect(note).toHaveTextContent(why);
    expect(note).toHaveTextContent('Everybody is as they were.');
  });

  it('shows a password link once, with the name of whom it is for and its end', async () => {
    const link = 'https://workshop.example/set-password?token=t';
    const expiresAt = '2026-06-04T08:00:00.000Z';
    const { user } = await show({ 'POST /api/people/new/password-link': { body: { link, expiresAt } } });
    await user.click(screen.getByRole('button', { name: 'Give N. Ew a link to set a password' }));
    const note = await screen.findByRole('alert');
    expect(note).toHaveTextContent('Give this link to N. Ew, and to nobody else');
    expect(note).toHaveTextContent(link);
    expect(note).toHaveTextContent('4 Jun, 09:00');
  });

  it('adds a person and shows their link', async () => {
    const answer = {
      person: { name: 'A. Dded' },
      link: 'https://workshop.example/l',
      expiresAt: '2026-06-04T08:00:00.000Z',
    };
    const { sent, user } = await show({ 'POST /api/people': { status: 201, body: answer } });
    await user.type(screen.getByLabelText('Printed name'), ' A. Dded ');
    await user.type(screen.getByLabelText('E-mail address'), 'added@workshop.example');
    await user.click(screen.getByRole('button', { name: 'Add the person' }));
    expect(await screen.findByText('Give this link to A. Dded, and to nobody else')).toBeVisible();
    expect(sent()[0]?.body).toEqual({
      name: 'A. Dded',
      email: 'added@workshop.example',
      roles: ['technician'],
    });
  });

  it('keeps what was typed when the e-mail address is taken', async () => {
    const why = 'Somebody has this address already.';
    const { user } = await show({ 'POST /api/people': refused(409, why, 'email') });
    await user.type(screen.getByLabelText('Printed name'), 'A. Dded');
    await user.type(screen.getByLabelText('E-mail address'), 'tech@workshop.example');
    await user.click(screen.getByRole('button', { name: 'Add the person' }));
    expect(await screen.findByText(why)).toBeVisible();
    expect(screen.getByLabelText('Printed name')).toHaveValue('A. Dded');
  });
});

describe('the tablets on that page', () => {
  const at = '2031-05-06T07:00:00.000Z';
  const bay = { id: 'd1', name: 'Bay 2', state: 'active', enrolledAt: at, lastHeardAt: at };
  const gone = { ...bay, id: 'd2', name: 'Bay 3', state: 'lost' };
  const devices = { 'GET /api/devices': { body: { devices: [bay, gone] } } };

  it('are declared lost with a reason and by holding, not by a touch', async () => {
    const { sent, user } = await show({ ...devices, 'PATCH /api/devices/d1': { body: {} } });
    await user.click(await screen.findByRole('button', { name: 'Declare Bay 2 lost' }));
    const dialog = within(screen.getByRole('dialog', { name: 'Declare Bay 2 lost' }));
    const hold = dialog.getByRole('button', { name: 'Declare Bay 2 lost' });
    expect(hold).toHaveAttribute('aria-disabled', 'true');
    await user.type(dialog.getByLabelText('How was it lost?'), 'left in a van');
    await user.click(hold);
    expect(sent()).toEqual([]);
    fireEvent.pointerDown(hold, { isPrimary: true, button: 0 });
    await waitFor(() => expect(sent()).toHaveLength(1), { timeout: 4000 });
    const body = { state: 'lost', reason: 'left in a van' };
    expect(sent()).toEqual([{ method: 'PATCH', path: '/api/devices/d1', body }]);
    await waitFor(() => expect(screen.queryByRole('dialog')).toBeNull());
  });

  it('that are lost say so and are taken back into use', async () => {
    const { sent, user } = await show({ ...devices, 'PATCH /api/devices/d2': { body: {} } });
    expect(await screen.findByText('lost: nothing it sends is taken')).toBeVisible();
    await user.click(screen.getByRole('button', { name: 'Bay 3 is found: take it back into use' }));
    expect(sent()).toEqual([{ method: 'PATCH', path: '/api/devices/d2', body: { state: 'active' } }]);
  });
});
