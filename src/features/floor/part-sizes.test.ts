import { describe, expect, it } from 'vitest';
import { NO_SIZES, valueOfParts } from './part-sizes';

const sizes = { housingBore: '50.018', upperWall: '1.985', lowerWall: '1.984', journal: '46.001' };

describe('a clearance by its parts', () => {
  it('is the bore less the shells and the pin, exactly, and surer than a card', () => {
    expect(valueOfParts(sizes).value).toEqual({
      by: 'parts',
      clearance: '0.048',
      uncertainty: '0.002',
      parts: sizes,
    });
  });

  it('is nothing while a size is missing', () => {
    expect(valueOfParts(NO_SIZES)).toEqual({});
    expect(valueOfParts({ ...sizes, journal: '46.' })).toEqual({});
  });

  it('says in words what can’t be', () => {
    expect(valueOfParts({ ...sizes, journal: '46.2' }).error).toMatch(/would bind/);
    expect(valueOfParts({ ...sizes, journal: '46.049' }).error).toMatch(/would bind/);
    expect(valueOfParts({ ...sizes, journal: '4' }).error).toMatch(/don’t belong together/);
    expect(valueOfParts({ ...sizes, upperWall: '0' }).error).toMatch(/larger than nothing/);
  });
});
