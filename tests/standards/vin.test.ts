import { describe, expect, it } from 'vitest';
import { checkVin } from '@/domain/vin';

describe('VIN check digit by 49 CFR 565.15', () => {
  it.each([
    ['1G4AH59H45G118341', '4', "the regulation's own worked sample"],
    ['1J9RP1A36A1644345', '6', 'NHTSA outline for new manufacturers, p. 18'],
    ['11111111111111111', '1', 'widely used test number, recomputed'],
  ])('%s has the check digit %s (%s)', (vin, expected) => {
    expect(checkVin(vin)).toEqual({ wellFormed: true, checkDigit: { expected, ok: true } });
  });

  // Derived from the rule
  it('takes small letters and a remainder of 10 as X', () => {
    expect(checkVin('1m8gdm9axkp042788')).toEqual({
      wellFormed: true,
      checkDigit: { expected: 'X', ok: true },
    });
  });

  it.each(['1M8GDM9A0KP042788', '11111111211111111'])(
    '%s has a wrong check digit, which is told and not refused',
    (vin) => {
      expect(checkVin(vin)).toMatchObject({ wellFormed: true, checkDigit: { ok: false } });
    },
  );

  it.each(['1M8GDM9AIKP042788', '1M8GDM9AXKP04278'])('%s is malformed: letter I, 16 characters', (vin) => {
    expect(checkVin(vin)).toEqual({ wellFormed: false });
  });
});
