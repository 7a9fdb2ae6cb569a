import { describe, expect, it } from 'vitest';
import { angleTool, Journal, torqueTool } from '../../../tests/support/journal';
import { smallPlan } from '../../../tests/support/small-documents';
import { capInHand, capWords, isCapBegun, isToolChange } from './cap-in-hand';

const CAP = 'build.tighten@rod1';

function capAfter(actions: number, tools = [torqueTool, angleTool]): Journal {
  const journal = new Journal(smallPlan()).performUntil(CAP);
  const uses = { [torqueTool.id]: 'torque', [angleTool.id]: 'angle' } as const;
  for (const tool of tools) journal.record('tool-taken', { use: uses[tool.id] ?? 'torque', tool });
  for (let i = 0; i < actions; i += 1) journal.tightenOnce(CAP);
  return journal;
}

describe('a cap in hand', () => {
  it('begins with its first pass and ends with its last act', () => {
    expect(capInHand(capAfter(0).state)).toBeUndefined();
    const begun = capAfter(1);
    expect(capInHand(begun.state)?.id).toBe(CAP);
    expect(isCapBegun(begun.state, begun.step(CAP))).toBe(true);
    const done = capAfter(0);
    done.tighten(CAP);
    expect(capInHand(done.state)).toBeUndefined();
    expect(isCapBegun(done.state, done.step(CAP))).toBe(false);
  });

  it('is in nobody’s hands while it waits for a part', () => {
    const journal = capAfter(2);
    journal.record('waiting-for-part', { part: 'rod bolts' }, { step: CAP });
    expect(capInHand(journal.state)).toBeUndefined();
  });

  it('is told by its bolts', () => {
    const journal = capAfter(1);
    expect(capWords(capInHand(journal.state)!)).toBe('1A and 1B');
  });
});

describe('another tool within a cap', () => {
  const other = { ...torqueTool, id: 'w2', name: 'Second wrench', serial: 'TW-2' };

  function changes(journal: Journal, use: 'torque' | 'angle', tool: typeof torqueTool): boolean {
    const [wrench] = journal.workshop.tools;
    const workshop = { ...journal.workshop, tools: [...journal.workshop.tools, { ...wrench!, ...other }] };
    const now = Date.parse(journal.state.lastAt!);
    return isToolChange(journal.state, workshop, journal.step(CAP), { use, tool }, now);
  }

  it('is a change when the one in hand would have done', () => {
    expect(changes(capAfter(1), 'torque', other)).toBe(true);
    expect(changes(capAfter(2), 'torque', other)).toBe(true);
  });

  it('is none before the cap has begun, when it is the same tool, or when there was none', () => {
    expect(changes(capAfter(0), 'torque', other)).toBe(false);
    expect(changes(capAfter(1), 'torque', torqueTool)).toBe(false);
    expect(changes(capAfter(2, [torqueTool]), 'angle', angleTool)).toBe(false);
  });
});
