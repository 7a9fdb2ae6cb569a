/** What can be told from the text of a VIN alone. */
export interface VinCheck {
  wellFormed: boolean;
  checkDigit?: { expected: string; ok: boolean };
}

const WELL_FORMED = /^[A-HJ-NPR-Z0-9]{17}$/;
/** 49 CFR 565.15 table III: a character's value is the last digit of its place here. I, O and Q are never used. */
const VALUES = '0123456789.ABCDEFGH..JKLMN.P.R..STUVWXYZ';
/** 49 CFR 565.15 table IV; the ninth place is the check digit itself. */
const WEIGHTS = [8, 7, 6, 5, 4, 3, 2, 10, 0, 9, 8, 7, 6, 5, 4, 3, 2];

/**
 * Checks the form of a VIN (17 characters without I, O, Q; small letters and outer spaces are taken) and, where
 * the form is right, its check digit by 49 CFR 565.15. Only vehicles for the North American market must have
 * that digit (ISO 3779 asks for none), so a wrong one is a warning and never a reason to refuse.
 */
export function checkVin(vin: string): VinCheck {
  const text = vin.trim().toUpperCase();
  if (!WELL_FORMED.test(text)) return { wellFormed: false };
  const sum = WEIGHTS.reduce(
    (total, weight, place) => total + weight * (VALUES.indexOf(text.charAt(place)) % 10),
    0,
  );
  const expected = sum % 11 === 10 ? 'X' : String(sum % 11);
  return { wellFormed: true, checkDigit: { expected, ok: text.charAt(8) === expected } };
}
