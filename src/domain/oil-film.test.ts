import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { filmFor, petroffFriction, sommerfeld, type FilmState } from '@/domain/oil-film';

const bearing = { viscosity: 0.008, speed: 50, unitLoad: 8e6, radius: 25, radialClearance: 0.025 };
/** The heaviest load that every table still has. */
const HEAVIEST = 0.0115;

const anyRatio = fc.oneof(
  fc.double({ min: 0.25, max: 5, noNaN: true }),
  fc.constantFrom(0.25, 0.5, 1, Infinity),
);
const anySommerfeld = fc.double({ min: Math.log(HEAVIEST), max: Math.log(1000), noNaN: true }).map(Math.exp);

describe('sommerfeld and petroffFriction', () => {
  it('count a clearance twice and once', () => {
    const wide = { ...bearing, radialClearance: 0.05 };
    expect(sommerfeld(bearing) / sommerfeld(wide)).toBeCloseTo(4, 9);
    expect(petroffFriction(bearing) / petroffFriction(wide)).toBeCloseTo(2, 9);
  });

  it('refuse what is not greater than zero', () => {
    for (const name of Object.keys(bearing)) {
      for (const value of [0, -1, Number.NaN, Infinity]) {
        expect(() => sommerfeld({ ...bearing, [name]: value }), name).toThrow('must be greater than zero');
        expect(() => petroffFriction({ ...bearing, [name]: value }), name).toThrow(RangeError);
      }
    }
  });
});

describe('filmFor', () => {
  it('never has a thicker film for a heavier load, at any length', () => {
    fc.assert(
      fc.property(anyRatio, anySommerfeld, anySommerfeld, (lengthToDiameter, a, b) => {
        const at = (S: number): number => filmFor({ sommerfeld: S, lengthToDiameter }).minimumFilmRatio;
        expect(at(Math.min(a, b))).toBeLessThanOrEqual(at(Math.max(a, b)) + 1e-12);
      }),
      { numRuns: 2000 },
    );
  });

  it('never has more friction for its size, or less of an angle, for a heavier load at the lengths of the tables', () => {
    fc.assert(
      fc.property(fc.constantFrom(0.25, 0.5, 1, Infinity), anySommerfeld, anySommerfeld, (ratio, a, b) => {
        const heavy = filmFor({ sommerfeld: Math.min(a, b), lengthToDiameter: ratio });
        const light = filmFor({ sommerfeld: Math.max(a, b), lengthToDiameter: ratio });
        expect(heavy.frictionVariable).toBeLessThanOrEqual(light.frictionVariable + 1e-9);
        expect(heavy.attitudeAngle).toBeLessThanOrEqual(light.attitudeAngle + 1e-9);
        expect(heavy.sideFlowRatio).toBeGreaterThanOrEqual(light.sideFlowRatio - 1e-9);
        expect(heavy.pressureRatio).toBeLessThanOrEqual(light.pressureRatio + 1e-9);
      }),
    );
  });

  it('stays within what a film can be', () => {
    fc.assert(
      fc.property(anyRatio, anySommerfeld, (lengthToDiameter, S) => {
        const film = filmFor({ sommerfeld: S, lengthToDiameter });
        expect(film.minimumFilmRatio).toBeGreaterThan(0);
        expect(film.minimumFilmRatio).toBeLessThan(1);
        expect(film.attitudeAngle).toBeGreaterThan(0);
        expect(film.attitudeAngle).toBeLessThan(90);
        expect(film.frictionVariable).toBeGreaterThan(0);
        expect(film.flowVariable).toBeGreaterThan(0);
        expect(film.sideFlowRatio).toBeGreaterThanOrEqual(0);
        expect(film.sideFlowRatio).toBeLessThanOrEqual(1);
        expect(film.pressureRatio).toBeGreaterThan(0);
        expect(film.pressureRatio).toBeLessThan(1);
      }),
      { numRuns: 1000 },
    );
  });

  it('holds the share of side flow to what it can be, where the cubic strays past it', () => {
    expect(filmFor({ sommerfeld: 0.0115, lengthToDiameter: 0.7 }).sideFlowRatio).toBe(1);
    expect(filmFor({ sommerfeld: 0.2, lengthToDiameter: 100 }).sideFlowRatio).toBeGreaterThanOrEqual(0);
  });

  it('runs on smoothly past the last row, and out to a bearing without load', () => {
    for (const [lengthToDiameter, last, unloaded] of [
      [Infinity, 0.24, { attitudeAngle: 70.92, pressureRatio: 0.83 }],
      [1, 1.33, { attitudeAngle: 85, pressureRatio: 0.542 }],
      [0.5, 4.31, { attitudeAngle: 88.5, pressureRatio: 0.528 }],
      [0.25, 16.2, { attitudeAngle: 89.5, pressureRatio: 0.524 }],
    ] as const) {
      const [on, past] = [last, last * (1 + 1e-9)].map((S) => filmFor({ sommerfeld: S, lengthToDiameter }));
      for (const quantity of Object.keys(on!) as (keyof FilmState)[]) {
        expect(past![quantity], quantity).toBeCloseTo(on![quantity], 5);
      }
      // What friction is above that of a journal in the middle goes with the square of how far it is off.
      const [excess, ofHalfTheLoad] = [last, last * 2].map(
        (S) => filmFor({ sommerfeld: S, lengthToDiameter }).frictionVariable / S - 2 * Math.PI ** 2,
      );
      expect(ofHalfTheLoad! / excess!).toBeCloseTo(1 / 4, 6);
      const light = filmFor({ sommerfeld: last * 1e9, lengthToDiameter });
      expect(light.minimumFilmRatio).toBeCloseTo(1, 8);
      expect(light.attitudeAngle).toBeCloseTo(unloaded.attitudeAngle, 6);
      expect(light.pressureRatio).toBeCloseTo(unloaded.pressureRatio, 6);
      expect(light.flowVariable).toBeCloseTo(Math.PI, 6);
      expect(light.sideFlowRatio).toBeCloseTo(0, 8);
      expect(light.frictionVariable / (last * 1e9)).toBeCloseTo(2 * Math.PI ** 2, 6);
    }
  });

  it('refuses loads that are too heavy for its tables, and says so', () => {
    for (const [lengthToDiameter, heaviest] of [
      [Infinity, 0.0115],
      [1, 0.00474],
      [0.5, 0.00609],
      [0.25, 0.0101],
      [0.4, HEAVIEST],
    ] as const) {
      expect(filmFor({ sommerfeld: heaviest, lengthToDiameter }).minimumFilmRatio).toBeGreaterThan(0);
      expect(() => filmFor({ sommerfeld: heaviest * 0.999, lengthToDiameter })).toThrow('too heavy');
    }
  });

  it('refuses a bearing that is too short, and numbers that can not be', () => {
    for (const lengthToDiameter of [0.249, 0, -1, Number.NaN]) {
      expect(() => filmFor({ sommerfeld: 0.1, lengthToDiameter })).toThrow(
        'a quarter of its diameter or more',
      );
    }
    for (const S of [0, -1, Number.NaN, Infinity]) {
      expect(() => filmFor({ sommerfeld: S, lengthToDiameter: 1 })).toThrow(RangeError);
    }
  });
});
