import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { afterEach, describe, expect, it } from 'vitest';
import { SumsPage } from './SumsPage';

afterEach(() => {
  location.hash = '';
});

function open(hash = '') {
  location.hash = hash;
  render(<SumsPage />);
  return userEvent.setup();
}

const keys = () => within(screen.getByRole('group', { name: 'Number keys' }));
const answer = () => screen.getByRole('region', { name: 'Answer' });

describe('the sums on the Floor', () => {
  it('turns a torque into every other unit as it is keyed in, by touch alone', async () => {
    const user = open();
    expect(answer()).toHaveTextContent('Key in: Value.');
    for (const key of ['4', '0']) await user.click(keys().getByRole('button', { name: key }));
    expect(answer()).toHaveTextContent('29.502 lbf·ft');
    await user.click(screen.getByRole('button', { name: 'lbf·ft' }));
    expect(answer()).toHaveTextContent('54.233 N·m');
    expect(answer()).toHaveTextContent('NIST SP 811');
  });

  it('takes a temperature below zero', async () => {
    const user = open();
    await user.click(screen.getByRole('button', { name: 'temperature' }));
    for (const key of ['4', '0']) await user.click(keys().getByRole('button', { name: key }));
    await user.click(screen.getByRole('button', { name: 'Below zero' }));
    expect(answer()).toHaveTextContent('-40 °F');
  });

  it('goes from field to field, and begins with the torque that was asked for', async () => {
    const user = open('job=j1&sum=adapter&target=32.5');
    expect(screen.getByRole('button', { name: /Torque asked/ })).toHaveTextContent('32.5 N·m');
    const field = () => screen.getByRole<HTMLInputElement>('textbox');
    expect(field()).toHaveAccessibleName('L, wrench');
    await user.type(field(), '400{Enter}');
    expect(field()).toHaveAccessibleName('E, adapter');
    await user.type(field(), '100{Enter}');
    await user.type(field(), '0');
    expect(answer()).toHaveTextContent('Set26.0 N·m');
    expect(screen.getByRole('img', { name: /at 0 degrees/ })).toBeVisible();
  });

  it('keeps to its four sums, each from its key', async () => {
    const user = open('sum=nonsense&target=alert(1)');
    const sums = () => within(screen.getByRole('navigation', { name: 'Sums' }));
    expect(sums().getByRole('button', { name: 'Units' })).toHaveAttribute('aria-current', 'page');
    await user.click(sums().getByRole('button', { name: 'Bolt' }));
    expect(screen.getByText(/The preload is an estimate/)).toBeVisible();
    await user.click(sums().getByRole('button', { name: 'Clearance' }));
    expect(screen.getByText(/A sum, no reading/)).toBeVisible();
  });
});
