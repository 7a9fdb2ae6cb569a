import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { pinAngles, turningPlan, type Engine, type TurningStop } from '@/domain/crank';

const engines = fc
  .array(
    fc.record({
      angle: fc.integer({ min: -400, max: 400 }),
      banks: fc.array(fc.integer({ min: -60, max: 60 }), { minLength: 1, maxLength: 2 }),
    }),
    { minLength: 1, maxLength: 5 },
  )
  .map((pins): Engine => {
    let rod = 0;
    return {
      crankpins: pins.map(({ angle, banks }, index) => ({
        pin: index + 1,
        angle,
        rods: banks.map((bankAxis) => ({ rod: (rod += 1), bankAxis })),
      })),
    };
  });

const mod = (angle: number): number => ((angle % 360) + 360) % 360;

/** The rods within reach at a crank angle, told apart from the plan's own arithmetic. */
function reachable(engine: Engine, reach: number, crank: number): number[] {
  return engine.crankpins.flatMap((pin) =>
    pin.rods
      .filter(({ bankAxis }) => {
        const off = mod(crank + pin.angle - bankAxis - 180);
        return Math.min(off, 360 - off) <= reach;
      })
      .map(({ rod }) => rod),
  );
}

/** Tries every whole degree: the least turn after which every rod has been in reach, and the fewest stops for it. */
function searchExhaustively(engine: Engine, reach: number, start: number): { turn: number; stops: number } {
  const all = new Set(engine.crankpins.flatMap((pin) => pin.rods.map(({ rod }) => rod)));
  const at = Array.from({ length: 360 }, (_, after) => reachable(engine, reach, start + after));
  const seen = new Set<number>();
  const turn = at.findIndex((rods) => {
    rods.forEach((rod) => seen.add(rod));
    return seen.size === all.size;
  });
  const forced = [...new Set(at[0]?.length === 0 ? [turn] : [0, turn])];
  let covers = new Set([
    forced
      .flatMap((after) => at[after] ?? [])
      .sort()
      .join(),
  ]);
  const choices = [...new Set(at.slice(0, turn + 1).map((rods) => rods.join()))].filter(Boolean);
  for (let more = 0; ; more += 1) {
    for (const cover of covers)
      if (new Set(cover.split(',')).size === all.size) return { turn, stops: forced.length + more };
    const next = new Set<string>();
    for (const cover of covers) {
      for (const choice of choices) next.add([...new Set(`${cover},${choice}`.split(','))].sort().join());
    }
    covers = next;
  }
}

function turnBetween(stops: TurningStop[], start: number): number {
  let total = 0;
  let angle = mod(start);
  for (const stop of stops) {
    total += mod(stop.angle - angle);
    angle = stop.angle;
  }
  return total;
}

describe('turningPlan', () => {
  it('turns no further and stops no oftener than an exhaustive search finds', () => {
    fc.assert(
      fc.property(
        engines,
        fc.integer({ min: 0, max: 180 }),
        fc.integer({ min: -360, max: 720 }),
        (engine, reach, start) => {
          const plan = turningPlan(engine, { reach, start });
          const best = searchExhaustively(engine, reach, start);
          expect(turnBetween(plan, start)).toBeCloseTo(best.turn, 5);
          expect(plan.length).toBe(best.stops);
        },
      ),
      { numRuns: 500 },
    );
  });

  it('serves every rod once, where it can be reached, and leaves no stop idle', () => {
    fc.assert(
      fc.property(
        engines,
        fc.integer({ min: 0, max: 180 }),
        fc.integer({ min: 0, max: 359 }),
        (engine, reach, start) => {
          const plan = turningPlan(engine, { reach, start });
          const served = plan.flatMap((stop) => stop.rods).toSorted((a, b) => a - b);
          expect(served).toEqual([...pinAngles(engine).keys()]);
          for (const stop of plan) {
            expect(stop.rods.length).toBeGreaterThan(0);
            expect(reachable(engine, reach + 1e-6, stop.angle)).toEqual(expect.arrayContaining(stop.rods));
          }
        },
      ),
    );
  });

  it('takes the start as a stop exactly where it serves a rod', () => {
    fc.assert(
      fc.property(
        engines,
        fc.integer({ min: 0, max: 90 }),
        fc.integer({ min: 0, max: 359 }),
        (engine, reach, start) => {
          const plan = turningPlan(engine, { reach, start });
          const atStart = reachable(engine, reach, start);
          expect(plan[0]?.angle === start).toBe(atStart.length > 0);
          if (atStart.length > 0) expect(plan[0]?.rods).toEqual(atStart.toSorted((a, b) => a - b));
        },
      ),
    );
  });

  it('does not lose a whole turn to a rounding error at the far edge of a window', () => {
    const degrees = (min: number, max: number): fc.Arbitrary<number> =>
      fc.integer({ min: min * 1e6, max: max * 1e6 }).map((millionths) => millionths / 1e6);
    fc.assert(
      fc.property(degrees(-360, 360), degrees(-60, 60), degrees(0, 90), (angle, bankAxis, reach) => {
        const engine: Engine = { crankpins: [{ pin: 1, angle, rods: [{ rod: 1, bankAxis }] }] };
        const edge = bankAxis + 180 - angle + reach;
        const [stop] = turningPlan(engine, { reach, start: edge });
        const off = mod((stop?.angle ?? Number.NaN) - edge);
        expect(Math.min(off, 360 - off)).toBeLessThan(1e-5);
      }),
    );
  });

  it('refuses what can not be', () => {
    const engine: Engine = { crankpins: [{ pin: 1, angle: 0, rods: [{ rod: 1, bankAxis: 0 }] }] };
    expect(() => turningPlan(engine, { reach: -1, start: 0 })).toThrow(RangeError);
    expect(() => turningPlan(engine, { reach: 181, start: 0 })).toThrow(RangeError);
    expect(() => turningPlan(engine, { reach: Number.NaN, start: 0 })).toThrow(RangeError);
    expect(() => turningPlan(engine, { reach: 10, start: Number.NaN })).toThrow(RangeError);
    expect(() => turningPlan({ crankpins: [] }, { reach: 10, start: 0 })).toThrow(RangeError);
  });
});

describe('pinAngles', () => {
  it('counts from crankpin 1 whatever angle the sheet gives it', () => {
    const engine: Engine = {
      crankpins: [
        { pin: 2, angle: 150, rods: [{ rod: 2, bankAxis: 0 }] },
        { pin: 1, angle: 30, rods: [{ rod: 1, bankAxis: 0 }] },
        { pin: 3, angle: -90, rods: [{ rod: 3, bankAxis: 0 }] },
      ],
    };
    expect([...pinAngles(engine)]).toEqual([
      [1, 0],
      [2, 120],
      [3, 240],
    ]);
  });

  it('refuses a rod or a crankpin that is named twice, and angles that are no numbers', () => {
    const rods = [{ rod: 1, bankAxis: 0 }];
    expect(() => pinAngles({ crankpins: [{ pin: 1, angle: 0, rods: [...rods, ...rods] }] })).toThrow('Rod 1');
    const twice = { pin: 1, angle: 0, rods };
    expect(() => pinAngles({ crankpins: [twice, { ...twice, rods: [{ rod: 2, bankAxis: 0 }] }] })).toThrow(
      'Crankpin 1',
    );
    expect(() => pinAngles({ crankpins: [{ pin: 1, angle: Number.NaN, rods }] })).toThrow(RangeError);
    expect(() => pinAngles({ crankpins: [{ pin: 1, angle: 0, rods: [] }] })).toThrow(RangeError);
  });
});
