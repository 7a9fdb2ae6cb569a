import { describe, expect, it } from 'vitest';
import type { Tool } from './tool';
import { dayAfter, standingOf } from './tool-standing';

const wrench: Tool = {
  ...{ id: 'w1', name: 'Long wrench', kind: 'torque wrench', serial: 'LW-0417' },
  ...{ rangeLow: '20', rangeHigh: '100', unit: 'N·m', dueOn: '2031-05-31' },
  ...{ state: 'in use', cycleLimit: 5000, cyclesUsed: 120 },
};

describe('how a tool stands', () => {
  it.each([
    ['2031-04-30', 'fit', 'in date'],
    ['2031-05-01', 'due soon', 'due in 30 days'],
    ['2031-05-30', 'due soon', 'due tomorrow'],
    ['2031-05-31', 'due soon', 'due today'],
    ['2031-06-01', 'not fit', 'its calibration counted until 2031-05-31'],
  ])('on %s is %s: %s', (on, kind, words) => {
    expect(standingOf(wrench, on)).toEqual({ kind, words, short: words });
  });

  it('says that a failed calibration bars it, and that a withdrawn tool is withdrawn', () => {
    const failed = { ...wrench, failure: 'at 20 N·m 1 of 5 is off' };
    expect(standingOf(failed, '2031-01-01')).toEqual({
      kind: 'not fit',
      words: 'its last calibration failed: at 20 N·m 1 of 5 is off',
      short: 'its last calibration failed',
    });
    expect(standingOf({ ...failed, state: 'withdrawn' }, '2031-01-01').kind).toBe('withdrawn');
  });

  it('says of a tool without a date whether it needs one', () => {
    expect(standingOf({ ...wrench, kind: 'feeler gauge', dueOn: null }, '2031-01-01')).toEqual({
      kind: 'fit',
      words: 'needs no calibration',
      short: 'needs no calibration',
    });
    expect(standingOf({ ...wrench, dueOn: null }, '2031-01-01').kind).toBe('not fit');
  });

  it('counts days over the end of a month and a year', () => {
    expect([dayAfter('2031-12-31', 1), dayAfter('2032-02-01', 28)]).toEqual(['2032-01-01', '2032-02-29']);
  });
});
