import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { afterEach, expect, it, vi } from 'vitest';
import { UnitsForm } from './UnitsForm';

afterEach(() => {
  vi.unstubAllGlobals();
});

it('shows what the shop has chosen, and sends another choice', async () => {
  let shown = 'none';
  const sent: unknown[] = [];
  vi.stubGlobal(
    'fetch',
    vi.fn((_url: unknown, options: RequestInit = {}) => {
      if (options.method === 'PUT') {
        const body = JSON.parse(options.body as string) as { shown: string };
        sent.push(body);
        shown = body.shown;
        return Promise.resolve(Response.json({ ok: true }));
      }
      return Promise.resolve(Response.json({ secondUnits: shown }));
    }),
  );
  render(<UnitsForm />);
  expect(await screen.findByRole('radio', { name: 'SI alone' })).toBeChecked();
  await userEvent.setup().click(screen.getByRole('radio', { name: 'Inch and pound beside it' }));
  await vi.waitFor(() => {
    expect(screen.getByRole('radio', { name: 'Inch and pound beside it' })).toBeChecked();
  });
  expect(sent).toEqual([{ shown: 'inch and pound' }]);
});
