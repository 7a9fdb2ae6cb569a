import { describe, expect, it } from 'vitest';
import { Journal, torqueTool } from '../../../tests/support/journal';
import { smallPlan } from '../../../tests/support/small-documents';
import { actWords, lastAct } from './last-act';

const STEP = 'build.tighten@rod1';

describe('the last act', () => {
  it('is told with both bolts where one touch recorded both', () => {
    const journal = new Journal(smallPlan()).performUntil(STEP);
    journal.tightenOnce(STEP);
    journal.tightenOnce(STEP, { afterMs: 0 });
    const acts = lastAct(journal.state);
    expect(acts.map(({ data }) => 'bolt' in data && data.bolt)).toEqual(['1B', '1A']);
    expect(actWords(acts, journal.plan)).toMatch(/^bolts 1A and 1B to \d+ N·m$/);
  });

  it('is the act before a tool was taken, and before what was taken back', () => {
    const journal = new Journal(smallPlan()).performUntil('strip.strap');
    journal.record('tool-taken', { use: 'torque', tool: torqueTool });
    expect(lastAct(journal.state)[0]).toMatchObject({ kind: 'done', step: 'strip.raise' });
    const [raised] = lastAct(journal.state);
    journal.record(
      'taken-back',
      { of: raised!.id, which: 'touched by mistake, not done' },
      { step: 'strip.raise' },
    );
    expect(lastAct(journal.state)[0]?.id).not.toBe(raised!.id);
  });

  it('is nothing on a job that was only opened', () => {
    expect(lastAct(new Journal(smallPlan()).state)).toEqual([]);
  });
});
