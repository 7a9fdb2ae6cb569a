import { describe, expect, it } from 'vitest';
import { calibrationPoints, judgeCalibration } from '@/domain/calibration';
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

describe('a calibration of a torque tool', () => {
  const wrench = {
    ...{ kind: 'torque wrench', rangeLow: null, rangeHigh: '100', unit: 'N·m' },
    torqueType: 'II' as const,
    torqueClass: 'A' as const,
  };
  /** `references` are what stood at the reference when the tool tripped, at one set value. */
  const at = (set: string, references: readonly string[]) =>
    references.map((reference) => ({ set, reference, unit: 'N·m' }));
  const five = (set: string) => at(set, [set, set, set, set, set]);
  const verdictOf = (...points: ReturnType<typeof at>[]) => judgeCalibration(wrench, points.flat()).verdict;

  it('is read at 20, 60 and 100 % of the largest torque (two tool makers’ pages that quote ISO 6789:2003)', () => {
    expect(calibrationPoints(wrench)).toEqual(['20', '60', '100']);
    expect(verdictOf(five('20'), five('60'), five('100'))).toBe('passed');
    expect(verdictOf(five('20'), five('60'))).toBe('failed');
    expect(verdictOf(five('20'), five('100'))).toBe('failed');
    expect(verdictOf(five('60'), five('100'))).toBe('failed');
  });

  it('begins at the lowest marked value where one is marked (2017 edition; trade press on the change of ISO 6789)', () => {
    const marked = { ...wrench, rangeLow: '12' };
    const readings = [five('60'), five('100')].flat();
    expect(calibrationPoints(marked)).toEqual(['12', '60', '100']);
    expect(judgeCalibration(marked, [...five('12'), ...readings]).verdict).toBe('passed');
    expect(judgeCalibration(marked, [...five('20'), ...readings]).verdict).toBe('failed');
  });

  it('has five readings a point (ISO 6789:2003, 6.5, from memory)', () => {
    expect(verdictOf(five('20').slice(1), five('60'), five('100'))).toBe('failed');
    expect(verdictOf([...five('20'), ...five('20')], five('60'), five('100'))).toBe('passed');
  });

  // ISO 6789-1:2017 clause 7, the formula and the limit from memory: ± 4 % of the reference
  it.each([
    [100, '96.2', 'passed'],
    [100, '96.0', 'failed'],
    [100, '104.1', 'passed'],
    [100, '104.2', 'failed'],
  ] as const)('with one reading of %d against %s has %s', (_set, reference, verdict) => {
    expect(verdictOf(five('20'), five('60'), at('100', ['100', '100', reference, '100', '100']))).toBe(
      verdict,
    );
  });

  // ISO 6789:2003 tables and ISO 6789-1:2017, 5.1.5, from memory: 5 % off passes at ± 6 % and fails at ± 4 %
  it.each([
    ['II', 'A', '10', 'passed'],
    ['II', 'A', '100', 'failed'],
    ['II', 'D', '100', 'passed'],
    ['I', 'A', '100', 'passed'],
    ['I', 'B', '100', 'failed'],
  ] as const)(
    'that is 5 %% off, of type %s class %s up to %s N·m, has %s',
    (type, toolClass, high, verdict) => {
      const tool = { ...wrench, torqueType: type, torqueClass: toolClass, rangeHigh: high };
      const readings = calibrationPoints(tool).flatMap((set) => {
        const reference = String(Number(set) / 1.05);
        return at(
          set,
          Array.from({ length: 5 }, () => reference.slice(0, 8)),
        );
      });
      expect(judgeCalibration(tool, readings).verdict).toBe(verdict);
    },
  );
});
