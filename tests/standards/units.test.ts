import { describe, expect, it } from 'vitest';
import { convert, type Unit } from '@/domain/units';

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

  // TM 5-2815-241-34&P p. 2-64 prints 70 to 75 ft·lb as 98 to 105 N·m (a factor of 1.4); p. 2-224 has it right.
  it.each([
    ['p. 2-64', [98, 105], false],
    ['p. 2-224', [95, 102], true],
  ] as const)('tells whether the pair printed on %s agrees within 1 %%', (_, printed, agrees) => {
    const exact = [convert(70, 'lbf·ft', 'N·m'), convert(75, 'lbf·ft', 'N·m')] as const;
    expect(exact[0]).toBeCloseTo(94.907, 3);
    expect(exact[1]).toBeCloseTo(101.686, 3);
    expect(exact.every((value, index) => Math.abs(printed[index]! / value - 1) <= 0.01)).toBe(agrees);
  });
});
