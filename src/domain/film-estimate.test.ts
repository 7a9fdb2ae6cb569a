import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { estimateFilm, type FilmConditions, gradeIn } from './film-estimate';

const conditions: FilmConditions = {
  ...{ diameter: 50, width: 25, speed: 3000, unitLoad: 5, temperature: 100, grade: '5W-30' },
};

describe('what a clearance means', () => {
  it('is worked out from the parts, each of which has its own check', () => {
    const made = estimateFilm(0.05, conditions);
    // By hand: the middle of a 30 is 10.9 mm²/s (SAE J300: 9.3 to 12.5), times 0.82
    expect(made.viscosity).toBeCloseTo(8.938, 3);
    // (25/0.025)² · 0.008938 · 50 / 5·10⁶
    expect(made.sommerfeld).toBeCloseTo(0.08938, 5);
    // Raimondi and Boyd at l/d 1/2, just under their row of 0.0923: h₀/c 0.2, f·r/c 3.26, Q 5.41, Qs/Q 0.874
    expect(made.filmRatio).toBeCloseTo(0.197, 2);
    expect(made.film).toBeCloseTo(4.9, 1);
    // 3.2 · 0.025/25 · 6250 N at 50 mm · π · 50/s
    expect(made.friction).toBeCloseTo(157, -1);
    // 5.42 · 25 · 0.025 · 50 · 25 mm³/s, 0.877 of it, in a minute
    expect(made.flow).toBeCloseTo(0.222, 2);
  });

  it('lets more oil through a wider bearing, and holds a thinner film in thinner oil', () => {
    const clearances = fc.double({ min: 0.025, max: 0.08, noNaN: true });
    fc.assert(
      fc.property(clearances, clearances, (a, b) => {
        const [tight, wide] = [Math.min(a, b), Math.max(a, b)].map((c) => estimateFilm(c, conditions));
        expect(wide!.flow).toBeGreaterThanOrEqual(tight!.flow - 1e-9);
        const hot = estimateFilm(a, { ...conditions, temperature: 120 });
        expect(hot.film).toBeLessThan(estimateFilm(a, conditions).film);
      }),
    );
  });

  it.each([
    ['no clearance', 0, {}, /clearance/],
    ['no speed', 0.05, { speed: 0 }, /speed/],
    ['no width', 0.05, { width: 0 }, /width/],
    ['no pin', 0.05, { diameter: -1 }, /diameter/],
    ['no load', 0.05, { unitLoad: Number.NaN }, /load/],
    ['a grade that is none', 0.05, { grade: '7W-31' }, /not an SAE J300 grade/],
    ['a load that the tables do not reach', 0.08, { unitLoad: 500 }, /./],
    ['a shell too narrow for them', 0.05, { width: 5 }, /quarter/],
  ])('refuses %s', (_, clearance, change, words) => {
    expect(() => estimateFilm(clearance, { ...conditions, ...change })).toThrow(RangeError);
    expect(() => estimateFilm(clearance, { ...conditions, ...change })).toThrow(words);
  });

  it('takes a W grade alone', () => {
    expect(estimateFilm(0.05, { ...conditions, grade: '20W' }).viscosity).toBeCloseTo(5.6 * 1.1 * 0.82, 6);
  });

  it('finds the grade in a specification', () => {
    expect(gradeIn('Merrow oil class M4, 5W-30')).toBe('5W-30');
    expect(gradeIn('axle oil A7')).toBeUndefined();
  });
});
