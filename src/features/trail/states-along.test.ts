import { describe, expect, it } from 'vitest';
import { replay } from '@/domain/job';
import { Journal } from '../../../tests/support/journal';
import { readTrailOf } from '../../../tests/support/read-trail';
import { smallPlan } from '../../../tests/support/small-documents';
import { statesAlong } from './states-along';

describe('the states along a trail', () => {
  const trail = readTrailOf(new Journal(smallPlan()).performUntil(null));
  const recorded = trail.entries.map((entry) => entry.recorded);

  it('are those of the replay, whichever is asked for first', () => {
    const stateAt = statesAlong(trail);
    for (const upTo of [recorded.length, 1, 20, 21, 40, 41, 57, 20])
      expect(stateAt(upTo)).toEqual(replay(trail.plans, recorded, { upTo }));
  });

  it('are those of the replay across a move to another plan', () => {
    const to = 'b'.repeat(64);
    const moved = {
      ...recorded[29]!,
      kind: 'plan-moved' as const,
      step: undefined,
      data: { to, reason: 'a better way', kept: [], voided: [] },
    };
    const plans = new Map([...trail.plans, [to, smallPlan('none')]]);
    const entries = trail.entries.map((entry, i) => (i === 29 ? { ...entry, recorded: moved } : entry));
    const stateAt = statesAlong({ ...trail, plans, entries });
    for (const upTo of [29, 30, 45, 60])
      expect(stateAt(upTo)).toEqual(
        replay(
          plans,
          entries.map((entry) => entry.recorded),
          { upTo },
        ),
      );
  });
});
