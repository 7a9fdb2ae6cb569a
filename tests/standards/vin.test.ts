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

  // Tables III and IV of the regulation: each letter has its value in a place of weight 2, which is the last.
  it.each([
    ...['A1', 'B2', 'C3', 'D4', 'E5', 'F6', 'G7', 'H8', 'J1', 'K2', 'L3', 'M4', 'N5', 'P7', 'R9'],
    ...['S2', 'T3', 'U4', 'V5', 'W6', 'X7', 'Y8', 'Z9'],
  ])('reads the letter and value %s', (pair) => {
    const [letter = '', value = ''] = pair;
    const expected = (last: string) => checkVin(`1111111111111111${last}`).checkDigit?.expected;
    expect(expected(letter)).toBe(expected(value));
  });

  it('weighs the places 8 7 6 5 4 3 2 10 0 9 8 7 6 5 4 3 2, and takes neither I nor O nor Q', () => {
    const weights = [8, 7, 6, 5, 4, 3, 2, 10, 0, 9, 8, 7, 6, 5, 4, 3, 2];
    const digits = weights.map((_, place) => {
      const vin = Array<string>(17).fill('0');
      vin[place] = '1';
      return checkVin(vin.join('')).checkDigit?.expected;
    });
    expect(digits).toEqual(weights.map((weight) => (weight === 10 ? 'X' : String(weight))));
    for (const letter of 'IOQ') expect(checkVin(`1111111111111111${letter}`)).toEqual({ wellFormed: false });
  });

  // 49 CFR 565 binds vehicles for one market; ISO 3779 asks for no digit (from memory). A generator's page names year
  // codes that the regulation leaves out (I, O, Q, U, Z, 0): other markets use the place as they like.
  it.each(['U', 'Z', '0'])('does not refuse a vehicle for the year code %s', (year) => {
    expect(checkVin(`111111111${year}1111111`).wellFormed).toBe(true);
  });
});
