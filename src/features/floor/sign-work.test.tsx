import { act, fireEvent, render, screen } from '@testing-library/react';
import { describe, expect, it, vi } from 'vitest';
import { phaseToSign, unsignedWork } from '@/domain/job-work';
import { FixtureRun } from '../../../tests/support/floor-run';
import { Journal } from '../../../tests/support/journal';
import { smallPlan } from '../../../tests/support/small-documents';
import { WorkToSignScreen } from './WorkToSignScreen';

function press(name: RegExp, ms: number) {
  vi.useFakeTimers();
  const button = screen.getByRole('button', { name });
  fireEvent.pointerDown(button, { isPrimary: true, button: 0 });
  act(() => void vi.advanceTimersByTime(ms));
  fireEvent.pointerUp(button);
  vi.useRealTimers();
}

describe('the end of a phase', () => {
  function show() {
    const journal = new Journal(smallPlan()).performUntil('build.turn-to@stop1');
    const due = phaseToSign(journal.state, 'tech')!;
    render(
      <FixtureRun
        journal={journal}
        over={() => <WorkToSignScreen phase={due.name} entries={due.entries} />}
      />,
    );
    return { journal, count: due.entries.length };
  }

  it('lists all that is signed for, with its number in words', () => {
    const { count } = show();
    expect(screen.getByRole('button', { name: `These ${count} entries are my work` })).toBeVisible();
    expect(screen.getByRole('heading', { name: /: done\. Is this your work\?$/ })).toBeVisible();
    expect(screen.getAllByRole('listitem').length).toBeGreaterThanOrEqual(count);
  });

  it('is signed by holding, and a touch alone signs nothing', async () => {
    const { journal, count } = show();
    press(/are my work$/, 300);
    expect(unsignedWork(journal.state, 'tech')).toHaveLength(count);
    press(/are my work$/, 1300);
    await vi.waitFor(() =>
      expect(journal.entries.at(-1)).toMatchObject({
        kind: 'work-signed',
        by: 'tech',
        with: [],
        data: { covers: { count } },
      }),
    );
    expect(unsignedWork(journal.state, 'tech')).toEqual([]);
  });
});
