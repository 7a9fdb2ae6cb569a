import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  addExact,
  compareDecimals,
  decimalToNumber,
  exactOf,
  exactToNumber,
  formatDecimal,
  isDecimal,
  parseTyped,
} from '@/domain/decimal';

describe('isDecimal', () => {
  it.each(['0', '12', '-3.5', '0.050', '130', '123456789.012345'])('accepts %s', (text) => {
    expect(isDecimal(text)).toBe(true);
  });

  it.each(['', '.5', '5.', '05', '+1', '1,5', '1e3', '-0', '-0.00', 'NaN', ' 1', '1234567890.1234567'])(
    'refuses "%s"',
    (text) => {
      expect(isDecimal(text)).toBe(false);
    },
  );
});

describe('parseTyped', () => {
  it.each([
    ['0,050', '0.050'],
    ['0.050', '0.050'],
    [' 1,5 ', '1.5'],
    ['.5', '0.5'],
    ['5.', '5'],
    ['007', '7'],
    ['−3', '-3'],
    ['-0', '0'],
    ['0', '0'],
  ])('turns "%s" into %s', (typed, stored) => {
    expect(parseTyped(typed)).toBe(stored);
  });

  it.each(['', ' ', ',', '1.2.3', '1,234.5', 'abc', '--1', '1e3', '1234567890.1234567'])(
    'refuses "%s"',
    (typed) => {
      expect(() => parseTyped(typed)).toThrow(RangeError);
    },
  );

  it('gives only what may be stored', () => {
    fc.assert(
      fc.property(fc.stringMatching(/^[-]?[0-9.,]{1,12}$/), (typed) => {
        try {
          expect(isDecimal(parseTyped(typed))).toBe(true);
        } catch (error) {
          if (!(error instanceof RangeError)) throw error;
        }
      }),
    );
  });
});

describe('exact arithmetic', () => {
  it('adds as a person does on paper', () => {
    expect(exactToNumber(addExact(exactOf(0.1), exactOf(0.2)))).toBe(0.3);
    expect(exactToNumber(addExact(exactOf(1e21), exactOf(-1e21)))).toBe(0);
  });

  it('gives every double back unchanged', () => {
    fc.assert(
      fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), (value) => {
        expect(exactToNumber(exactOf(value)) === value).toBe(true);
      }),
    );
  });

  it('compares by value and not by text', () => {
    expect(compareDecimals('0.05', '0.050')).toBe(0);
    expect(compareDecimals('10', '9.9')).toBeGreaterThan(0);
    expect(compareDecimals('-2', '-1')).toBeLessThan(0);
  });

  it('refuses what is not a number', () => {
    expect(() => exactOf(Number.NaN)).toThrow(RangeError);
    expect(() => exactOf(Number.POSITIVE_INFINITY)).toThrow(RangeError);
    expect(() => decimalToNumber('1,5')).toThrow(RangeError);
    expect(() => compareDecimals('x', '1')).toThrow(RangeError);
  });
});

describe('formatDecimal', () => {
  it.each([
    [0.05, 3, '0.050'],
    [1.005, 2, '1.00'],
    [1.015, 2, '1.02'],
    [-0.0004, 3, '0.000'],
    [-1.25, 1, '-1.2'],
    [1e-7, 8, '0.00000010'],
    [130, 0, '130'],
  ])('writes %d with %i places as %s', (value, places, text) => {
    expect(formatDecimal(value, places)).toBe(text);
  });

  it('refuses places that make no sense', () => {
    expect(() => formatDecimal(1, -1)).toThrow(RangeError);
    expect(() => formatDecimal(1, 1.5)).toThrow(RangeError);
  });
});
