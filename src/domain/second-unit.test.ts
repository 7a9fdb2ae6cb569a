import { describe, expect, it } from 'vitest';
import { besideSI } from './second-unit';

describe('the unit beside SI', () => {
  it.each([
    ['40', 'N·m', '29.5 lbf·ft'],
    ['0.0762', 'mm', '0.0030 in'],
    ['25.4', 'µm', '1.00 thou'],
    ['85', '°C', '185 °F'],
    ['-40', '°C', '-40 °F'],
    ['4', 'bar', '58 psi'],
    ['400', 'kPa', '58 psi'],
    ['20', 'km', '12.4 mi'],
    ['6.5', 'L', '6.9 US qt'],
    ['100', 'N', '22 lbf'],
    ['48.1', 'kN', '10810 lbf'],
  ])('of %s %s is %s', (value, unit, words) => {
    expect(besideSI('inch and pound', value, unit)).toBe(words);
  });

  it('is not there where the workshop shows none, for what has none, and for what is no number yet', () => {
    expect(besideSI('none', '40', 'N·m')).toBeUndefined();
    expect(besideSI(undefined, '40', 'N·m')).toBeUndefined();
    expect(besideSI('inch and pound', '110', 'deg')).toBeUndefined();
    expect(besideSI('inch and pound', '110', 'cloths')).toBeUndefined();
    expect(besideSI('inch and pound', '4.', 'N·m')).toBeUndefined();
  });
});
