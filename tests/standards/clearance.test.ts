import { describe, expect, it } from 'vitest';
import { clearanceFromCard, clearanceFromParts, clearanceFromWidth, judge, taper } from '@/domain/clearance';
import { convert } from '@/domain/units';

describe('plastic gauging thread', () => {
  // A gauge maker's specification: the cross-section is unchanged, so clearance = constant / width. Diameters invented.
  it.each([
    [0.3, 0.025, 2.8274],
    [0.3, 0.05, 1.4137],
    [0.3, 0.076, 0.9301],
    [0.5, 0.1, 1.9635],
    [0.5, 0.15, 1.309],
  ])('a round thread of %d mm crushed to %d mm is %d mm wide', (diameter, clearance, width) => {
    expect(clearanceFromWidth(diameter, width)).toBeCloseTo(clearance, 5);
  });

  it('wider means tighter, so the widest reading is the smallest clearance (TM 10-3930-659-34 p. 2-15)', () => {
    const card = [0.025, 0.038, 0.051, 0.076].map((clearance) => ({
      clearance,
      width: (Math.PI * 0.3 ** 2) / (4 * clearance),
    }));
    const widths = [1, 1.2, 1.5, 1.9, 2.4, 2.8];
    for (const read of [
      (w: number) => clearanceFromCard(card, w).clearance,
      (w: number) => clearanceFromWidth(0.3, w),
    ]) {
      const clearances = widths.map(read);
      expect(clearances).toEqual(clearances.toSorted((a, b) => b - a));
    }
  });

  // TM 5-2420-222-34 paragraph 1-16 p. 1-7: the three threads by the colour of their sleeves
  it.each([
    ['green', [0.001, 0.003], [0.0254, 0.0762]],
    ['red', [0.002, 0.006], [0.0508, 0.1524]],
    ['blue', [0.004, 0.009], [0.1016, 0.2286]],
  ] as const)('the range of the %s thread in inches and millimetres', (_, inches, millimetres) => {
    inches.forEach((value, index) => expect(convert(value, 'in', 'mm')).toBeCloseTo(millimetres[index]!, 4));
  });

  it('taper of 0.0018 and 0.0029 in is 0.0011 in, over an example limit of 0.001 (TM 9-2320-289-34 p. 3-45)', () => {
    const spread = taper(0.0018, 0.0029);
    expect(spread).toBeCloseTo(0.0011, 9);
    expect(judge({ value: spread, low: 0, high: 0.001, uncertainty: 0 }).verdict).toBe('outside');
  });
});

describe('clearance from measured parts', () => {
  it('is bore less both walls less crankpin (arithmetic; common practice, no source)', () => {
    const parts = { housingBore: 55.5, upperWall: 1.985, lowerWall: 1.985, journal: 51.48 };
    expect(clearanceFromParts(parts)).toBe(0.05);
  });
});
