import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it } from 'vitest';
import { toBase64url } from '@/domain/base64url';
import { answerDesk, type DeskAnswer, refused } from '../../../tests/support/desk-server';
import { BringInFile } from './BringInFile';

const HASH = 'ab'.repeat(32);

const content = (over: object = {}) => ({
  ...{ v: 1, format: 'witnessmark-tablet', tablet: 't-1', name: 'Bay 2' },
  ...{ savedAt: '2031-05-06T07:00:00.000Z', clockOffsetMs: 0 },
  entries: [{ entry: { id: 'one' } }, { entry: { id: 'two' } }],
  photographs: [],
  ...over,
});

const row = { words: 'Bolt 1A marked, yellow', job: '0147', by: 'T. Nician', at: '2031-05-06T06:58:00.000Z' };

async function pick(text: string, answers: Record<string, DeskAnswer> = {}) {
  const server = answerDesk(answers);
  render(<BringInFile zone="Europe/Lisbon" />);
  const file = new File([text], 'witnessmark-tablet-bay-2.json', { type: 'application/json' });
  await userEvent.setup().upload(screen.getByLabelText(/The file of the tablet/), file);
  return server;
}

describe('bringing in a tablet’s file', () => {
  it('says of each record what became of it', async () => {
    const verdicts = [
      { ...row, id: 'one', verdict: 'recorded' },
      { ...row, id: 'two', verdict: 'recorded', code: 'order', reason: 'Two tablets: both did it.' },
      {
        ...row,
        id: 'three',
        verdict: 'refused',
        code: 'pin-wrong',
        reason: 'The PIN was wrong. Sign again.',
      },
      {
        ...row,
        id: 'four',
        verdict: 'waiting',
        code: 'earlier-missing',
        reason: 'Record 7 has not come yet.',
      },
      { ...row, id: 'five', verdict: 'already recorded' },
    ];
    const { requests } = await pick(JSON.stringify(content()), {
      'POST /api/devices/file': { body: { tablet: 'Bay 2', verdicts } },
    });
    const note = await screen.findByRole('alert');
    expect(note).toHaveTextContent('Bay 2: 2 recorded, 1 there already, 1 refused, 1 waiting');
    expect(note).toHaveTextContent('What waits is in the file alone: keep it');
    const table = within(screen.getByRole('table', { name: 'What became of each record' }));
    expect(table.getByText('Recorded.')).toBeVisible();
    expect(table.getByText('Recorded, with a conflict. Two tablets: both did it.')).toBeVisible();
    expect(table.getByText('Refused, and kept aside whole. The PIN was wrong. Sign again.')).toBeVisible();
    expect(table.getByText('Waits. Record 7 has not come yet.')).toBeVisible();
    expect(table.getByText('Was there already.')).toBeVisible();
    const { photographs, name, ...body } = content();
    expect([photographs, name]).toEqual([[], 'Bay 2']);
    expect(requests).toEqual([{ method: 'POST', path: '/api/devices/file', body }]);
  });

  it('sends the photographs first, and says which were not taken', async () => {
    const bytes = toBase64url(Uint8Array.of(1, 2, 3));
    const photographs = [
      { hash: HASH, type: 'image/jpeg', bytes },
      { hash: 'cd'.repeat(32), type: 'image/jpeg', bytes: '!' },
    ];
    const { requests } = await pick(JSON.stringify(content({ photographs })), {
      [`PUT /api/photos/${HASH}`]: { status: 201, body: { hash: HASH } },
      'POST /api/devices/file': { body: { tablet: 'Bay 2', verdicts: [] } },
    });
    const note = await screen.findByRole('alert');
    expect(note).toHaveTextContent('1 photograph kept');
    expect(note).toHaveTextContent('Photograph cdcdcdcd: its bytes in the file are damaged.');
    expect(requests.map(({ path }) => path)).toEqual([`/api/photos/${HASH}`, '/api/devices/file']);
  });

  it('says what is wrong with a file, and sends nothing of it', async () => {
    const { requests } = await pick('{"format":"another"}');
    const note = await screen.findByRole('alert');
    expect(note).toHaveTextContent('This is not a tablet’s file');
    expect(note).toHaveTextContent('Nothing was taken in');
    expect(requests).toEqual([]);
  });

  it('says in the server’s words why it ended, and that the same file can be brought in again', async () => {
    const why = 'The tablet that this file is of was not found here.';
    await pick(JSON.stringify(content()), { 'POST /api/devices/file': refused(404, why) });
    const [note] = await screen.findAllByRole('alert');
    expect(note).toHaveTextContent(why);
    expect(note).toHaveTextContent('Bring the same file in again.');
  });
});
