import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { convert, isUnit, measureTheSame, roundToStep, UNITS, type Unit } from '@/domain/units';

describe('convert', () => {
  it('goes there and back for every pair of units of one quantity', () => {
    for (const from of UNITS) {
      for (const to of UNITS.filter((unit) => measureTheSame(from, unit))) {
        expect(convert(convert(37.5, from, to), to, from)).toBeCloseTo(37.5, 9);
      }
    }
  });

  it('leaves a value in its own unit untouched', () => {
    fc.assert(
      fc.property(
        fc.double({ noNaN: true, noDefaultInfinity: true, min: -200 }),
        fc.constantFrom(...UNITS),
        (value, unit) => {
          expect(convert(value, unit, unit)).toBe(value);
        },
      ),
    );
  });

  it('refuses to mix quantities', () => {
    expect(() => convert(1, 'N·m', 'mm')).toThrow('N·m measures torque, mm measures length.');
  });

  it('refuses an unknown unit, even one that every object knows', () => {
    expect(() => convert(1, 'furlong' as Unit, 'mm')).toThrow(RangeError);
    expect(() => convert(1, 'mm', 'toString' as Unit)).toThrow(RangeError);
    expect(isUnit('constructor')).toBe(false);
  });

  it('refuses what is not a number and temperatures that cannot be', () => {
    expect(() => convert(Number.NaN, 'mm', 'in')).toThrow(RangeError);
    expect(() => convert(Number.POSITIVE_INFINITY, 'mm', 'in')).toThrow(RangeError);
    expect(() => convert(-273.16, '°C', '°F')).toThrow(RangeError);
    expect(convert(-273.15, '°C', '°F')).toBeCloseTo(-459.67, 9);
  });
});

describe('roundToStep', () => {
  it.each([
    [0.5, 1, 0],
    [1.5, 1, 2],
    [2.5, 1, 2],
    [-0.5, 1, 0],
    [-1.5, 1, -2],
    [1.005, 0.01, 1],
    [1.015, 0.01, 1.02],
    [0.0335, 0.001, 0.034],
    [12.24, 0.1, 12.2],
    [7, 5, 5],
    [7.5, 5, 10],
    [12.5, 5, 10],
  ])('rounds %d by %d to %d', (value, step, rounded) => {
    expect(roundToStep(value, step)).toBeCloseTo(rounded, 12);
  });

  it('mirrors negative values and stays within half a step', () => {
    fc.assert(
      fc.property(
        fc.double({ min: -1000, max: 1000, noNaN: true }),
        fc.constantFrom(0.001, 0.01, 0.05, 0.5, 1, 5),
        (value, step) => {
          expect(roundToStep(-value, step)).toBeCloseTo(-roundToStep(value, step), 12);
          expect(Math.abs(roundToStep(value, step) - value)).toBeLessThanOrEqual(step / 2 + 1e-9);
        },
      ),
    );
  });

  it('refuses a step that is not greater than zero', () => {
    for (const step of [0, -1, Number.NaN, Number.POSITIVE_INFINITY]) {
      expect(() => roundToStep(1, step)).toThrow(RangeError);
    }
    expect(() => roundToStep(Number.NaN, 1)).toThrow(RangeError);
  });
});
