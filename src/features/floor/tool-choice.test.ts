import { describe, expect, it } from 'vitest';
import { angleTool, buildWorkshop, Journal, torqueTool } from '../../../tests/support/journal';
import { smallPlan } from '../../../tests/support/small-documents';
import { fitToolInHand, offerTools, toolWords, wantedFor } from './tool-choice';

const now = Date.parse('2026-06-02T10:00:00Z');

describe('the tool in hand', () => {
  it('is offered with fit ones first and the reason beside the others', () => {
    const offers = offerTools(buildWorkshop(), 'torque', wantedFor('torque', 'A', 25), now);
    expect(offers.map(({ tool, isFit }) => [tool.id, isFit])).toEqual([
      ['w1', true],
      ['late', false],
    ]);
    expect(offers[1]!.reasons.join()).toContain('2026-01-31');
  });

  it('is asked again when it does not reach the next pass', () => {
    const journal = new Journal(smallPlan());
    journal.record('tool-taken', { use: 'torque', tool: torqueTool });
    const fits = (torque: number) =>
      fitToolInHand(journal.state, buildWorkshop(), 'torque', wantedFor('torque', 'A', torque), now)?.id;
    expect(fits(25)).toBe('w1');
    expect(fits(200)).toBeUndefined();
  });

  it('is the wrench of the right range once each was taken for the job', () => {
    const big = { ...torqueTool, id: 'w2', name: 'Big wrench', serial: 'TW-2' };
    const workshop = buildWorkshop();
    const [small] = workshop.tools;
    const tools = [
      ...workshop.tools,
      { ...small!, id: 'w2', name: 'Big wrench', rangeLow: '60', rangeHigh: '300' },
    ];
    const journal = new Journal(smallPlan(), { ...workshop, tools });
    journal.record('tool-taken', { use: 'torque', tool: torqueTool });
    journal.record('tool-taken', { use: 'torque', tool: big });
    const fits = (torque: number) =>
      fitToolInHand(journal.state, journal.workshop, 'torque', wantedFor('torque', 'A', torque), now)?.id;
    expect(fits(25)).toBe('w1');
    expect(fits(200)).toBe('w2');
  });

  it('is named with its due date in words', () => {
    expect(toolWords(angleTool)).toBe('Angle gauge, due 31 Dec 2026');
  });
});
