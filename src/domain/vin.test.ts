import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { checkVin } from '@/domain/vin';

const CHARACTERS = 'ABCDEFGHJKLMNPRSTUVWXYZ0123456789'.split('');
const vins = fc.string({ unit: fc.constantFrom(...CHARACTERS), minLength: 17, maxLength: 17 });

describe('checkVin', () => {
  it('finds every change of one digit outside the check digit', () => {
    fc.assert(
      fc.property(vins, fc.nat(16), fc.nat(9), (vin, place, digit) => {
        fc.pre(place !== 8 && /\d/.test(vin.charAt(place)) && vin.charAt(place) !== String(digit));
        const expected = checkVin(vin).checkDigit?.expected;
        const changed = vin.slice(0, place) + String(digit) + vin.slice(place + 1);
        expect(checkVin(changed).checkDigit?.expected).not.toBe(expected);
      }),
    );
  });

  it('says ok once the expected digit stands in the ninth place', () => {
    fc.assert(
      fc.property(vins, (vin) => {
        const expected = checkVin(vin).checkDigit?.expected ?? '';
        expect(expected).toMatch(/^[0-9X]$/);
        expect(checkVin(vin.slice(0, 8) + expected + vin.slice(9)).checkDigit?.ok).toBe(true);
      }),
    );
  });

  it.each([
    '',
    'SHORT',
    '1111111111111111I',
    '1111111111111111O',
    '1111111111111111Q',
    '111111111111111111',
    '11111111 11111111',
  ])('finds "%s" malformed and judges no check digit', (vin) => {
    expect(checkVin(vin)).toEqual({ wellFormed: false });
  });
});
