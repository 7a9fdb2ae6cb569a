import { createUnit, unit as libraryUnit } from 'mathjs';
import { describe, expect, it } from 'vitest';
import { convert, measureTheSame, UNITS, type Unit } from '@/domain/units';

describe('units against NIST SP 811 appendix B.8', () => {
  it.each<[number, Unit, number, Unit]>([
    [1, 'kgf·m', 9.80665, 'N·m'],
    [1, 'lbf·in', 0.1129848290276167, 'N·m'],
    [1, 'mi', 1.609344, 'km'],
    [1, 'US qt', 0.946352946, 'L'],
    [98.6, '°C', 209.48, '°F'],
    [212, '°F', 100, '°C'],
    // Derived from the factors of the same appendix.
    [0.05, 'mm', 1.968503937, 'thou'],
    [100, 'mi', 160.9344, 'km'],
    [3, 'thou', 0.0762, 'mm'],
    [40, 'N·m', 29.502485971, 'lbf·ft'],
    [4, 'bar', 58.015095092, 'psi'],
    [5, 'kgf·m', 49.03325, 'N·m'],
    [6.5, 'L', 6.868473361, 'US qt'],
  ])('%d %s is %d %s (printed to 7 digits)', (value, from, expected, to) => {
    expect(Math.abs(convert(value, from, to) / expected - 1)).toBeLessThan(1e-7);
  });

  it('-40 °C is -40 °F (from memory: identity of C = (F − 32) / 1.8)', () => {
    expect(convert(-40, '°C', '°F')).toBeCloseTo(-40, 9);
  });

  it('absolute zero is -273.15 °C and -459.67 °F, and nothing is colder (from memory: by definition of the kelvin)', () => {
    expect(convert(-459.67, '°F', '°C')).toBeCloseTo(-273.15, 9);
    expect(() => convert(-459.68, '°F', '°C')).toThrow('below absolute zero');
    expect(() => convert(-273.16, '°C', '°F')).toThrow('below absolute zero');
  });
});

describe('units against dual-unit figures of public technical manuals', () => {
  // TM 10-3930-675-24-2 WP 0273; TM 9-2320-289-34 p. 3-45
  it.each([
    [50, 68],
    [105, 142],
    [155, 210],
    [40, 54],
    [110, 149],
    [100, 136],
  ])('%d lbf·ft is printed as %d N·m', (poundFeet, newtonMetres) => {
    expect(Math.abs(convert(poundFeet, 'lbf·ft', 'N·m') - newtonMetres)).toBeLessThanOrEqual(0.5);
  });

  // TM 55-1905-223-24-1 paragraphs (10) to (12)
  it.each([
    [0.0135, 0.343],
    [0.0185, 0.47],
  ])('%d in is printed as %d mm', (inches, millimetres) => {
    expect(Math.abs(convert(inches, 'in', 'mm') - millimetres)).toBeLessThanOrEqual(0.0005);
  });

  // TM 5-2815-241-34&P p. 2-64 prints 70 to 75 ft·lb as 98 to 105 N·m (a factor of 1.4); p. 2-224 has it right. A
  // sheet here names one unit a figure, so a wrong pair can't get in; the check is what whoever copies one needs.
  it.each([
    ['p. 2-64', [98, 105], false],
    ['p. 2-224', [95, 102], true],
  ] as const)('tells whether the pair printed on %s agrees within 1 %%', (_, printed, agrees) => {
    const exact = [convert(70, 'lbf·ft', 'N·m'), convert(75, 'lbf·ft', 'N·m')] as const;
    expect(exact[0]).toBeCloseTo(94.907, 3);
    expect(exact[1]).toBeCloseTo(101.686, 3);
    expect(exact.every((value, index) => Math.abs(printed[index]! / value - 1) <= 0.01)).toBe(agrees);
  });

  // The passes of the same page that follow
  it.each([
    [140, 189.815],
    [150, 203.373],
  ])('%d lbf·ft is %d N·m', (poundFeet, newtonMetres) => {
    expect(convert(poundFeet, 'lbf·ft', 'N·m')).toBeCloseTo(newtonMetres, 3);
  });
});

// A library that knows units by factors of its own. It has no imperial quart, which is a quarter of the gallon of
// 4.54609 L; its psi is cut off at 12 digits (6894.75729276459 Pa, exactly 6894.757293168361…).
describe('units against an independent library, every pair both ways', () => {
  createUnit('imperialgallon', '4.54609 L');
  const names: Record<Unit, [name: string, share: number]> = {
    'N·m': ['N m', 1],
    'lbf·ft': ['lbf ft', 1],
    'lbf·in': ['lbf in', 1],
    'kgf·m': ['kgf m', 1],
    mm: ['mm', 1],
    µm: ['um', 1],
    in: ['inch', 1],
    thou: ['mil', 1],
    deg: ['deg', 1],
    rad: ['rad', 1],
    '°C': ['degC', 1],
    '°F': ['degF', 1],
    kPa: ['kPa', 1],
    bar: ['bar', 1],
    psi: ['psi', 1],
    km: ['km', 1],
    mi: ['mile', 1],
    L: ['L', 1],
    'US qt': ['quart', 1],
    'imp qt': ['imperialgallon', 4],
    N: ['N', 1],
    kN: ['kN', 1],
    lbf: ['lbf', 1],
  };
  const pairs = UNITS.flatMap((from) =>
    UNITS.filter((to) => to !== from && measureTheSame(from, to)).map((to): [Unit, Unit] => [from, to]),
  );

  it('has them all', () => {
    expect(pairs).toHaveLength(4 * 3 + 4 * 3 + 2 + 2 + 3 * 2 + 2 + 3 * 2 + 3 * 2);
  });

  it.each(pairs)('%s to %s', (from, to) => {
    const [[source, ofSource], [target, ofTarget]] = [names[from], names[to]];
    const allowed = from === 'psi' || to === 'psi' ? 1e-10 : 1e-12;
    for (const value of [0.003, 1, 37.5, 4200]) {
      const expected = libraryUnit(value / ofSource, source).toNumber(target) * ofTarget;
      expect(Math.abs(convert(value, from, to) - expected)).toBeLessThanOrEqual(Math.abs(expected) * allowed);
    }
  });
});
