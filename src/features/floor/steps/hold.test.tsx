import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it } from 'vitest';
import { FixtureRun } from '../../../../tests/support/floor-run';
import { buildWorkshop, Journal } from '../../../../tests/support/journal';
import { smallPlan } from '../../../../tests/support/small-documents';

const STEP = 'build.caps-marked';
const press = async (name: RegExp | string) => userEvent.setup().click(screen.getByRole('button', { name }));
const main = () => document.querySelector<HTMLElement>('.main-action')!;
async function key(digits: string) {
  for (const digit of digits) await press(digit);
}

async function handToSigner({ isOnline = true } = {}) {
  const journal = new Journal(smallPlan()).performUntil(STEP);
  render(<FixtureRun journal={journal} isOnline={isOnline} />);
  await userEvent.setup().click(await screen.findByRole('button', { name: /^Hand it to the signer/ }));
  return journal;
}

async function lookAndCount(count: string) {
  await userEvent.setup().click(screen.getByRole('radio', { name: /^S. Visor/ }));
  expect(screen.queryByRole('button', { name: /photographs only/ })).toBeNull();
  await press(/^I looked at the vehicle/);
  expect(main()).toHaveTextContent('your own count');
  await key(count);
  await press(new RegExp(`^I counted ${count}`));
}

describe('a hold point', () => {
  it('is handed over with the author’s own word, and says why others may not sign', async () => {
    const journal = await handToSigner();
    expect(journal.entries.at(-1)).toMatchObject({ kind: 'work-signed', by: 'tech' });
    const technician = screen.getByRole('radio', { name: /^T. Nician/ });
    expect(technician).toBeDisabled();
    expect(technician).toHaveAccessibleDescription(/may not sign this/);
    expect(screen.getByRole('radio', { name: /^S. Visor/ })).toBeEnabled();
  });

  it('says of whom the authorisation is over, and what unlocks it', async () => {
    const workshop = buildWorkshop();
    const people = workshop.people.map((one) =>
      one.id === 'sup' ? { ...one, authorisedUntil: '2000-01-31' } : one,
    );
    const journal = new Journal(smallPlan(), { ...workshop, people }).performUntil(STEP);
    render(<FixtureRun journal={journal} />);
    await userEvent.setup().click(await screen.findByRole('button', { name: /^Hand it to the signer/ }));
    const supervisor = screen.getByRole('radio', { name: /^S. Visor/ });
    expect(supervisor).toBeDisabled();
    expect(supervisor).toHaveAccessibleDescription(
      'The authorisation of S. Visor to sign counted until 31 Jan 2000. The owner renews it on the People page.',
    );
  });

  it('puts the signer’s certificate on the signature and beside it', async () => {
    const workshop = buildWorkshop();
    const certificate = { number: 'T-MT-014', kind: 'master technician' };
    const people = workshop.people.map((one) => (one.id === 'sup' ? { ...one, certificate } : one));
    const journal = new Journal(smallPlan(), { ...workshop, people }).performUntil(STEP);
    render(<FixtureRun journal={journal} isOnline />);
    await userEvent.setup().click(await screen.findByRole('button', { name: /^Hand it to the signer/ }));
    await lookAndCount('8');
    await key('123456');
    await press(/^Sign/);
    expect(journal.entries.at(-1)).toMatchObject({ kind: 'signed', data: { certificate } });
    expect(screen.getByText('T-MT-014, master technician')).toBeVisible();
  });

  it('is signed with the signer’s own count, presence and PIN, once with a network', async () => {
    const journal = await handToSigner();
    await lookAndCount('8');
    expect(screen.getByText(/I looked at each head at the vehicle and counted 8 marks/)).toBeVisible();
    await key('123456');
    await press(/^Sign/);
    expect(journal.entries.at(-1)).toMatchObject({
      kind: 'signed',
      by: 'sup',
      with: [],
      data: {
        count: 8,
        presence: 'at the vehicle',
        meaning: 'I looked at each head at the vehicle and counted 8 marks.',
      },
    });
    expect(screen.getByText('SIGNED, TO BE CHECKED')).toBeVisible();
    expect(screen.getByText(/Work goes on at risk until then/)).toBeVisible();
    expect(screen.getByRole('button', { name: /^Next: / })).toBeVisible();
  });

  it('asks the PIN twice without a network, and both must agree', async () => {
    const journal = await handToSigner({ isOnline: false });
    await lookAndCount('8');
    await key('123456');
    await press(/^Once more/);
    await key('123457');
    await press(/^Sign/);
    expect(screen.getByRole('alert')).toHaveTextContent('The two PINs differ');
    expect(journal.entries.at(-1)?.kind).not.toBe('signed');
    await key('123456');
    await press(/^Once more/);
    await key('123456');
    await press(/^Sign/);
    expect(journal.entries.at(-1)).toMatchObject({ kind: 'signed', by: 'sup' });
  });

  it('refuses a count that differs from the record, in words', async () => {
    const journal = await handToSigner();
    await lookAndCount('7');
    await key('123456');
    await press(/^Sign/);
    expect(journal.entries.at(-1)?.kind).not.toBe('signed');
    expect(screen.getByText(/The signer's count and the record differ/)).toBeVisible();
  });

  it('waits for the network where its route says so', async () => {
    const journal = new Journal(smallPlan()).performUntil('build.clear-to-close');
    journal.sign('build.clear-to-close', { checked: false });
    render(<FixtureRun journal={journal} isOnline={false} />);
    expect(await screen.findByText(/Work past this hold point waits until then/)).toBeVisible();
    expect(screen.getByRole('button', { name: /^Send it now/ })).toBeVisible();
  });
});
