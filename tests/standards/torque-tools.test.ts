import { describe, expect, it } from 'vitest';
import { deviationPercent, fitness, permissibleDeviation, type Tool } from '@/domain/tool';

describe('deviation of a torque tool', () => {
  // ISO 6789-1:2017 clause 7, the formula from memory: divided by the reference, not by the set value
  it.each([
    [100, 96.2, 3.95, 4, true],
    [100, 96, 4.167, 4, false],
    [100, 104.1, -3.939, 4, true],
    [100, 104.2, -4.031, 4, false],
    [8, 8.5, -5.882, 6, true],
    [8, 8.6, -6.977, 6, false],
  ])('set %d against %d is off by %d %%', (set, reference, deviation, limit, passes) => {
    expect(deviationPercent({ set, reference })).toBeCloseTo(deviation, 3);
    expect(Math.abs(deviationPercent({ set, reference })) <= limit).toBe(passes);
  });
});

describe('permissible deviation of a torque tool', () => {
  it('is 6 % up to 10 N·m and 4 % above for type II class A (a tool manual that quotes ISO 6789)', () => {
    expect(permissibleDeviation({ type: 'II', class: 'A', maximum: 10 })).toBe(6);
    expect(permissibleDeviation({ type: 'II', class: 'A', maximum: 10.1 })).toBe(4);
  });

  // ISO 6789:2003 tables and ISO 6789-1:2017, 5.1.5, from memory
  it.each([
    ['I', 'A', 6, 6],
    ['I', 'B', 6, 4],
    ['I', 'C', 6, 4],
    ['I', 'D', 6, 6],
    ['I', 'E', 6, 4],
    ['II', 'A', 6, 4],
    ['II', 'B', 6, 4],
    ['II', 'C', 6, 4],
    ['II', 'D', 6, 6],
    ['II', 'E', 6, 6],
    ['II', 'F', 6, 6],
    ['II', 'G', 6, 6],
  ] as const)('type %s class %s: ± %d %% small, ± %d %% large', (type, toolClass, small, large) => {
    expect(permissibleDeviation({ type, class: toolClass, maximum: 10 })).toBe(small);
    expect(permissibleDeviation({ type, class: toolClass, maximum: 200 })).toBe(large);
  });
});

describe('the lowest torque a wrench is trusted at', () => {
  const wrench: Tool = {
    ...{ id: 'w', name: 'Wrench', kind: 'torque wrench', serial: '1', unit: 'N·m', dueOn: '2031-12-31' },
    ...{ rangeLow: null, rangeHigh: '50', state: 'in use', cycleLimit: null, cyclesUsed: null },
  };
  const isFit = (tool: Tool, value: number): boolean =>
    fitness(tool, { kind: 'torque wrench', value, unit: 'N·m', criticalClass: 'A' }, '2031-01-01').fit;

  it('is 20 % of its maximum (2003 edition; trade press on the change of ISO 6789)', () => {
    expect([isFit(wrench, 9.9), isFit(wrench, 10)]).toEqual([false, true]);
  });

  it('is its lowest marked value where one is marked (2017 edition; the same)', () => {
    const marked = { ...wrench, rangeLow: '8' };
    expect([isFit(marked, 7.9), isFit(marked, 8)]).toEqual([false, true]);
  });
});
