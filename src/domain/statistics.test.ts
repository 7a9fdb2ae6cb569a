import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { conformityProbability, cp, cpk, mean, range, sampleSd } from '@/domain/statistics';

const number = fc.double({ min: -1000, max: 1000, noNaN: true });
const positive = fc.double({ min: 0.001, max: 100, noNaN: true });
const limits = fc.tuple(number, positive).map(([low, width]) => ({ low, high: low + width }));

describe('mean, sampleSd and range', () => {
  it('of a few values', () => {
    expect(mean([2, 4, 9])).toBe(5);
    expect(sampleSd([2, 4, 9])).toBeCloseTo(Math.sqrt(13), 12);
    expect(range([4, 2, 9])).toBe(7);
    expect(range([0.3, 0.1])).toBe(0.2);
    expect([mean([7]), range([7])]).toEqual([7, 0]);
    expect(sampleSd([7, 7])).toBe(0);
  });

  it('keep what they were given as it was', () => {
    const values = Object.freeze([3, 1, 2]);
    expect([mean(values), sampleSd(values), range(values)]).toEqual([2, 1, 2]);
  });

  it('refuse too few values, and what is not a number', () => {
    expect(() => mean([])).toThrow('one value');
    expect(() => range([])).toThrow('one value');
    expect(() => sampleSd([1])).toThrow('two values');
    for (const of of [mean, sampleSd, range]) {
      expect(() => of([1, Number.NaN])).toThrow(RangeError);
      expect(() => of([1, Infinity])).toThrow(RangeError);
    }
  });
});

describe('cp and cpk', () => {
  it('are alike for a process in the middle, and cpk is never the greater', () => {
    fc.assert(
      fc.property(limits, number, positive, ({ low, high }, centre, sd) => {
        const whole = cp({ low, high, sd });
        expect(cpk({ low, high, mean: centre, sd })).toBeLessThanOrEqual(whole * (1 + 1e-9));
        expect(Math.abs(cpk({ low, high, mean: (low + high) / 2, sd }) / whole - 1)).toBeLessThan(1e-9);
      }),
    );
  });

  it('is negative where the mean lies outside', () => {
    expect(cpk({ low: 0, high: 1, mean: 1.5, sd: 0.5 })).toBeCloseTo(-1 / 3, 12);
    expect(cpk({ low: 0, high: 1, mean: -0.5, sd: 0.5 })).toBeCloseTo(-1 / 3, 12);
  });

  it('refuse what can not be', () => {
    for (const sd of [0, -1, Number.NaN]) {
      expect(() => cp({ low: 0, high: 1, sd })).toThrow('standard deviation');
      expect(() => cpk({ low: 0, high: 1, mean: 0, sd })).toThrow('standard deviation');
    }
    for (const high of [0, -1]) {
      expect(() => cp({ low: 0, high, sd: 1 })).toThrow('below the high limit');
      expect(() => cpk({ low: 0, high, mean: 0, sd: 1 })).toThrow('below the high limit');
    }
    expect(() => cp({ low: Number.NaN, high: 1, sd: 1 })).toThrow('low limit');
    expect(() => cp({ low: 0, high: Infinity, sd: 1 })).toThrow('high limit');
    expect(() => cpk({ low: 0, high: 1, mean: Number.NaN, sd: 1 })).toThrow('mean must be a number');
  });
});

describe('conformityProbability', () => {
  it('lies between 0 and 1, and grows with the room between the limits', () => {
    fc.assert(
      fc.property(limits, number, positive, positive, ({ low, high }, value, standardUncertainty, more) => {
        const at = (within: { low?: number; high?: number }): number =>
          conformityProbability({ value, standardUncertainty, ...within });
        const chances = [
          at({ low, high }),
          at({ low, high: high + more }),
          at({ low: low - more, high: high + more }),
        ];
        chances.push(at({ low: low - more }));
        for (const chance of chances) {
          expect(chance).toBeGreaterThanOrEqual(0);
          expect(chance).toBeLessThanOrEqual(1);
        }
        for (const [less, greater] of [
          [0, 1],
          [1, 2],
          [2, 3],
        ] as const) {
          expect(chances[less]).toBeLessThanOrEqual(chances[greater]! + 1e-15);
        }
      }),
    );
  });

  it('falls as the value goes past a limit', () => {
    fc.assert(
      fc.property(number, number, number, positive, (limit, a, b, standardUncertainty) => {
        const [near, far] = [Math.min(a, b), Math.max(a, b)];
        const below = (value: number): number =>
          conformityProbability({ value, standardUncertainty, high: limit });
        const above = (value: number): number =>
          conformityProbability({ value, standardUncertainty, low: limit });
        expect(below(far)).toBeLessThanOrEqual(below(near));
        expect(above(near)).toBeLessThanOrEqual(above(far));
      }),
    );
  });

  it('keeps its digits far out on either side, alike', () => {
    const chance = (value: number): number =>
      conformityProbability({ value, standardUncertainty: 1, low: -1, high: 1 });
    expect(chance(-9)).toBeGreaterThan(0);
    expect(chance(9) / chance(-9)).toBeCloseTo(1, 12);
    // The tail of the normal distribution beyond eight deviations (Abramowitz and Stegun 26.2.12, from memory).
    expect(chance(9)).toBeCloseTo(6.22e-16, 18);
  });

  it('refuses what can not be', () => {
    const reading = { value: 1, standardUncertainty: 1, low: 0, high: 2 };
    expect(() => conformityProbability({ value: 1, standardUncertainty: 1 })).toThrow('At least one limit');
    for (const standardUncertainty of [0, -1, Number.NaN]) {
      expect(() => conformityProbability({ ...reading, standardUncertainty })).toThrow(
        'standard uncertainty',
      );
    }
    expect(() => conformityProbability({ ...reading, value: Number.NaN })).toThrow('value must be');
    expect(() => conformityProbability({ ...reading, high: 0 })).toThrow('below the high limit');
    expect(() => conformityProbability({ ...reading, low: Number.NaN })).toThrow('low limit');
  });
});
