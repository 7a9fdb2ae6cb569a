import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { valueOnCurve, type Knot } from '@/domain/monotone-curve';

const knots: Knot[] = [
  { x: 0, y: 0 },
  { x: 1, y: 1 },
  { x: 3, y: 2 },
  { x: 4, y: 7 },
];

describe('valueOnCurve', () => {
  it('goes through its knots, and straight where they lie straight', () => {
    for (const { x, y } of knots) expect(valueOnCurve(knots, x)).toBeCloseTo(y, 12);
    const line = [0, 1, 2.5, 4].map((x) => ({ x, y: 3 - 2 * x }));
    for (const x of [0.3, 1.7, 3.9]) expect(valueOnCurve(line, x)).toBeCloseTo(3 - 2 * x, 12);
    expect(valueOnCurve(knots.slice(0, 2), 0.25)).toBe(0.25);
  });

  // By hand: slopes 1, 0.5 and 5 over widths 1, 2 and 1; at x = 1 (9 / (5 + 8)), at x = 3 (9 / (8 + 5/5)).
  it('bends as its slopes ask for', () => {
    const [at1, at3] = [9 / (5 / 1 + 4 / 0.5), 9 / (4 / 0.5 + 5 / 5)];
    expect(valueOnCurve(knots, 2)).toBeCloseTo(1.5 + (2 / 8) * (at1 - at3), 12);
    expect(valueOnCurve(knots, 0.5)).toBeCloseTo(0.5 + (1 / 8) * (1 - at1), 12);
  });

  it('neither overshoots nor turns where the knots rise', () => {
    const step = fc.record({
      x: fc.double({ min: 0.01, max: 5, noNaN: true }),
      y: fc.double({ min: 0, max: 50, noNaN: true }),
    });
    fc.assert(
      fc.property(
        fc.array(step, { minLength: 2, maxLength: 8 }),
        fc.double({ min: 0, max: 1, noNaN: true }),
        fc.double({ min: 0, max: 1, noNaN: true }),
        (steps, a, b) => {
          let at: Knot = { x: 0, y: 0 };
          const rising = steps.map(({ x, y }) => (at = { x: at.x + x, y: at.y + y }));
          const [first, last] = [rising[0]!, rising.at(-1)!];
          const place = (share: number): number => Math.min(last.x, first.x + share * (last.x - first.x));
          const [low, high] = [Math.min(a, b), Math.max(a, b)].map((share) =>
            valueOnCurve(rising, place(share)),
          );
          expect(low).toBeLessThanOrEqual(high! + 1e-9);
          expect(low).toBeGreaterThanOrEqual(first.y - 1e-9);
          expect(high).toBeLessThanOrEqual(last.y + 1e-9);
        },
      ),
    );
  });

  it('is level where the knots turn', () => {
    const peak = [
      { x: 0, y: 0 },
      { x: 1, y: 1 },
      { x: 2, y: 0 },
    ];
    for (const x of [0.5, 0.9, 0.99, 1.01, 1.5]) expect(valueOnCurve(peak, x)).toBeLessThanOrEqual(1);
    expect(valueOnCurve(peak, 0.999)).toBeCloseTo(1, 5);
  });

  it('refuses places beyond its ends and knots that are no curve', () => {
    for (const x of [-0.001, 4.001, Number.NaN])
      expect(() => valueOnCurve(knots, x)).toThrow('beyond the ends');
    expect(() => valueOnCurve(knots.slice(0, 1), 0)).toThrow('two places or more');
    expect(() => valueOnCurve([...knots, { x: 4, y: 8 }], 1)).toThrow('must rise');
  });
});
