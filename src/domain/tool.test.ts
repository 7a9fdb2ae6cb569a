import { describe, expect, it } from 'vitest';
import { deviationPercent, fitness, permissibleDeviation, type Tool, type ToolUse } from '@/domain/tool';

const wrench: Tool = {
  ...{ id: 'w1', name: 'Long wrench', kind: 'torque wrench', serial: 'LW-0417' },
  ...{ rangeLow: '20', rangeHigh: '100', unit: 'N·m', dueOn: '2031-05-31' },
  ...{ state: 'in use', cycleLimit: 5000, cyclesUsed: 120 },
};
const use: ToolUse = { kind: 'torque wrench', value: 60, unit: 'N·m', criticalClass: 'A' };
const day = '2031-05-01';

describe('fitness', () => {
  it('finds a known tool of the right kind, in range, in date and within its cycles fit', () => {
    expect(fitness(wrench, use, day)).toEqual({ fit: true, reasons: [] });
  });

  it('still counts the due date itself, and the day after no more', () => {
    expect(fitness(wrench, use, '2031-05-31').fit).toBe(true);
    expect(fitness(wrench, use, '2031-06-01')).toEqual({
      fit: false,
      reasons: ['its calibration counted until 2031-05-31'],
    });
  });

  it('bars a tool whose last calibration failed from class A, however far its date is off', () => {
    const failed = { ...wrench, failure: 'at 20 N·m there are 4 readings, and 5 are needed' };
    const reasons = ['its last calibration failed: at 20 N·m there are 4 readings, and 5 are needed'];
    expect(fitness(failed, use, day)).toEqual({ fit: false, reasons });
    expect(fitness(failed, { ...use, criticalClass: 'B' }, day)).toEqual({ fit: true, reasons });
    expect(fitness({ ...wrench, failure: null }, use, day).fit).toBe(true);
  });

  it('still counts the cycle limit itself', () => {
    expect(fitness({ ...wrench, cyclesUsed: 5000 }, use, day).fit).toBe(true);
    expect(fitness({ ...wrench, cyclesUsed: 5001 }, use, day).fit).toBe(false);
    expect(fitness({ ...wrench, cycleLimit: null, cyclesUsed: 9999 }, use, day).fit).toBe(true);
  });

  it.each([
    [19.9, false],
    [20, true],
    [100, true],
    [100.1, false],
  ])('judges %d N·m against a range of 20 to 100', (value, fit) => {
    expect(fitness(wrench, { ...use, value }, day).fit).toBe(fit);
  });

  it('trusts a wrench from a fifth of its largest torque up where no lower end is marked', () => {
    expect(fitness({ ...wrench, rangeLow: null, rangeHigh: '110' }, { ...use, value: 22 }, day).fit).toBe(
      true,
    );
    expect(fitness({ ...wrench, rangeLow: null, rangeHigh: '110' }, { ...use, value: 21.9 }, day).fit).toBe(
      false,
    );
  });

  it('compares a range that is marked in another unit', () => {
    const marked: Tool = { ...wrench, rangeLow: '10', rangeHigh: '75', unit: 'lbf·ft' };
    expect(fitness(marked, { ...use, value: 101 }, day).fit).toBe(true);
    expect(fitness(marked, { ...use, value: 102 }, day).fit).toBe(false);
  });

  it('doubts a tool whose range is unknown or means something else', () => {
    expect(fitness({ ...wrench, rangeHigh: null }, use, day).reasons).toEqual(['its range is not known']);
    expect(fitness({ ...wrench, unit: 'stone' }, use, day).reasons).toEqual(['its range is not known']);
    expect(fitness({ ...wrench, unit: 'bar' }, use, day).fit).toBe(false);
  });

  it('bars an unknown tool from class A only', () => {
    expect(fitness(undefined, use, day).fit).toBe(false);
    expect(fitness(undefined, { ...use, criticalClass: 'C' }, day)).toEqual({
      fit: true,
      reasons: ['it is not known to the workshop'],
    });
  });

  it('lets classes B and C use a doubtful tool, and says why it is doubtful', () => {
    const late = fitness(wrench, { ...use, criticalClass: 'B' }, '2032-01-01');
    expect(late).toEqual({ fit: true, reasons: ['its calibration counted until 2031-05-31'] });
  });

  it('bars a withdrawn tool and one of another kind from every class', () => {
    const slight = { ...use, criticalClass: 'C' as const };
    expect(fitness({ ...wrench, state: 'withdrawn' }, slight, day).fit).toBe(false);
    const other = fitness({ ...wrench, kind: 'angle gauge' }, slight, day);
    expect(other).toEqual({ fit: false, reasons: ['its kind is angle gauge, and this needs torque wrench'] });
  });

  it('asks for a calibration date only of tools that need one', () => {
    expect(fitness({ ...wrench, dueOn: null }, use, day).reasons).toEqual([
      'no calibration date of it is known',
    ]);
    const feeler: Tool = {
      ...wrench,
      kind: 'feeler gauge',
      rangeLow: null,
      rangeHigh: null,
      unit: null,
      dueOn: null,
    };
    expect(fitness(feeler, { kind: 'feeler gauge', criticalClass: 'A' }, day)).toEqual({
      fit: true,
      reasons: [],
    });
  });

  it('refuses days that can not be', () => {
    for (const wrong of ['', '2031-02-30', '2031-13-01', '31.05.2031', '2031-05-31T10:00:00Z']) {
      expect(() => fitness(wrench, use, wrong)).toThrow(RangeError);
      expect(() => fitness({ ...wrench, dueOn: wrong }, use, day)).toThrow(RangeError);
    }
    expect(() => fitness(wrench, { ...use, value: Number.NaN }, day)).toThrow(RangeError);
  });
});

describe('deviationPercent and permissibleDeviation', () => {
  it('refuse what can not be', () => {
    expect(() => deviationPercent({ set: 0, reference: 1 })).toThrow(RangeError);
    expect(() => deviationPercent({ set: 1, reference: -1 })).toThrow(RangeError);
    expect(() => permissibleDeviation({ type: 'I', class: 'F', maximum: 50 })).toThrow('have no class F');
    expect(() => permissibleDeviation({ type: 'II', class: 'A', maximum: 0 })).toThrow(RangeError);
    expect(() => permissibleDeviation({ type: 'II', class: 'AB' as 'A', maximum: 50 })).toThrow(RangeError);
    expect(() => permissibleDeviation({ type: 'III' as 'II', class: 'A', maximum: 50 })).toThrow(RangeError);
  });
});
