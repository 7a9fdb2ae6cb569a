import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { gradeLimits, viscosityAt, type ViscosityPoint } from '@/domain/oil-film';

const cold = { temperature: 40, kinematic: 95 };
const hot = { temperature: 100, kinematic: 13.5 };
const points = [cold, hot] as const;

describe('viscosityAt', () => {
  it('gives back its two points, in either order and down to the thinnest', () => {
    for (const pair of [points, [hot, cold]] as const) {
      for (const { temperature, kinematic } of pair) {
        expect(viscosityAt({ points: pair, temperature }) / kinematic).toBeCloseTo(1, 12);
      }
    }
    const thin = [
      { temperature: 20, kinematic: 0.9 },
      { temperature: 60, kinematic: 0.5 },
    ] as const;
    expect(viscosityAt({ points: thin, temperature: 60 })).toBeCloseTo(0.5, 12);
  });

  it('is thinner at every hotter temperature', () => {
    const kinematic = fc.double({ min: 0.5, max: 1000, noNaN: true });
    const temperature = fc.double({ min: -10, max: 150, noNaN: true });
    fc.assert(
      fc.property(
        kinematic,
        fc.double({ min: 1.2, max: 10, noNaN: true }),
        temperature,
        temperature,
        (v, ratio, a, b) => {
          fc.pre(Math.abs(a - b) > 0.01);
          const oil = [
            { temperature: 100, kinematic: v },
            { temperature: 40, kinematic: v * ratio },
          ] as const;
          const at = (t: number): number | undefined => {
            try {
              return viscosityAt({ points: oil, temperature: t });
            } catch (error) {
              expect(error).toBeInstanceOf(RangeError);
              return undefined;
            }
          };
          const [thick, thin] = [at(Math.min(a, b)), at(Math.max(a, b))];
          fc.pre(thick !== undefined && thin !== undefined);
          expect(thin).toBeLessThan(thick);
        },
      ),
    );
  });

  it('refuses points that can not be', () => {
    const refuses = (a: ViscosityPoint, b: ViscosityPoint): void => {
      expect(() => viscosityAt({ points: [a, b], temperature: 60 })).toThrow(RangeError);
    };
    refuses(cold, { ...hot, temperature: 40 });
    refuses(cold, { ...hot, kinematic: 95 });
    refuses(cold, { ...hot, kinematic: 96 });
    for (const kinematic of [0.2, 0, -1, 2.1e7, Number.NaN]) refuses(cold, { ...hot, kinematic });
    for (const temperature of [-70.1, -300, Number.NaN]) refuses({ ...cold, temperature }, hot);
    refuses(cold, { ...hot, temperature: 370.1 });
  });

  it('refuses a temperature that can not be, and one where the equation no longer holds', () => {
    for (const temperature of [-70.1, 370.1, Number.NaN, Infinity]) {
      expect(() => viscosityAt({ points, temperature })).toThrow('between -70 and 370');
    }
    expect(viscosityAt({ points, temperature: 370 })).toBeLessThan(1);
    const thick = [{ temperature: 40, kinematic: 5000 }, hot] as const;
    expect(() => viscosityAt({ points: thick, temperature: -70 })).toThrow('no longer holds');
    const thin = [
      { temperature: 40, kinematic: 0.5 },
      { temperature: 100, kinematic: 0.25 },
    ] as const;
    expect(viscosityAt({ points: thin, temperature: -70 })).toBeGreaterThan(1);
    expect(() => viscosityAt({ points: thin, temperature: 370 })).toThrow('no longer holds');
  });

  it('holds from 0.21 to 20 000 000 mm²/s, ends included', () => {
    const ends = [
      { temperature: -50, kinematic: 2e7 },
      { temperature: 300, kinematic: 0.21 },
    ] as const;
    expect(viscosityAt({ points: ends, temperature: 100 })).toBeGreaterThan(0.21);
    const beyond = [{ temperature: -50, kinematic: 2.01e7 }, ends[1]] as const;
    expect(() => viscosityAt({ points: beyond, temperature: 100 })).toThrow('between 0.21 and');
    const below = [ends[0], { temperature: 300, kinematic: 0.209 }] as const;
    expect(() => viscosityAt({ points: below, temperature: 100 })).toThrow('between 0.21 and');
  });
});

describe('gradeLimits', () => {
  it('joins the two halves of a multigrade', () => {
    expect(gradeLimits('5W-30')).toEqual({
      ...{ kv100Min: 9.3, kv100Max: 12.5, hths: 2.9 },
      ...{ ccs: { maximum: 6600, temperature: -30 }, mrv: { maximum: 60_000, temperature: -35 } },
    });
    expect(gradeLimits('20W-8').kv100Min).toBe(5.6);
  });

  it.each([
    '',
    'W',
    '-',
    '5W-',
    '-30',
    '30W',
    '5',
    '70',
    '5W-5',
    '5w-30',
    'SAE 30',
    '5W30',
    '5W-30 ',
    '30-5W',
    'toString',
  ])('refuses "%s"', (grade) => {
    expect(() => gradeLimits(grade)).toThrow('is not an SAE J300 grade');
  });

  it.each(['25W-8', '25W-12', '25W-16', '25W-20'])('refuses %s, which no oil can be', (grade) => {
    expect(() => gradeLimits(grade)).toThrow('No oil can be');
  });
});
