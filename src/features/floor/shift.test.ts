import { describe, expect, it } from 'vitest';
import { Journal } from '../../../tests/support/journal';
import { smallPlan } from '../../../tests/support/small-documents';
import { mustTakeOver, needsPin } from './shift';

const HOUR = 3_600_000;
const begun = () => new Journal(smallPlan()).performUntil('strip.raise');
const lastAt = (journal: Journal) => Date.parse(journal.state.lastAt!);

describe('a change of who is working', () => {
  it('asks the PIN of someone who has not worked on the job this shift', () => {
    const journal = begun();
    expect(needsPin(journal.state, 'mate', lastAt(journal) + 1000)).toBe(true);
    expect(needsPin(journal.state, 'tech', lastAt(journal) + 1000)).toBe(false);
  });

  it('asks again after a long silence and on the next day', () => {
    const journal = begun();
    expect(needsPin(journal.state, 'tech', lastAt(journal) + HOUR)).toBe(true);
    expect(needsPin(journal.state, 'tech', lastAt(journal) + 14 * HOUR)).toBe(true);
  });

  it('is said before someone else goes on, and not on a job that nobody has worked on', () => {
    expect(mustTakeOver(begun().state, 'mate')).toBe(true);
    expect(mustTakeOver(begun().state, 'tech')).toBe(false);
    expect(mustTakeOver(new Journal(smallPlan()).state, 'tech')).toBe(false);
  });
});
