import { describe, expect, it } from 'vitest';
import { pinAngles, turningPlan, type Engine } from '@/domain/crank';

/** An engine in line whose crank is the one that fires evenly in the given order. */
function inline(firingOrder: number[]): Engine {
  const interval = 720 / firingOrder.length;
  return {
    crankpins: firingOrder.map((rod, index) => ({
      pin: rod,
      angle: (720 - index * interval) % 360,
      rods: [{ rod, bankAxis: 0 }],
    })),
  };
}

/** An eight with two rods a pin: 1 to 4 on the bank at +45°, 5 to 8 on the bank at -45°. */
function eight(angles: number[]): Engine {
  return {
    crankpins: angles.map((angle, index) => ({
      ...{ pin: index + 1, angle },
      rods: [
        { rod: index + 1, bankAxis: 45 },
        { rod: index + 5, bankAxis: -45 },
      ],
    })),
  };
}

describe('crank geometry', () => {
  it('inline six, 1-5-3-6-2-4: bottoms at 60 (3, 4), 180 (1, 6) and 300 (2, 5) (Denton, Automobile Mechanical and Electrical Systems, p. 107)', () => {
    const six = inline([1, 5, 3, 6, 2, 4]);
    expect(turningPlan(six, { reach: 0, start: 0 })).toEqual([
      { angle: 60, rods: [3, 4] },
      { angle: 180, rods: [1, 6] },
      { angle: 300, rods: [2, 5] },
    ]);
    const angles = pinAngles(six);
    expect([1, 2, 3].map((rod) => angles.get(rod))).toEqual([1, 2, 3].map((rod) => angles.get(7 - rod)));
  });

  it('cross-plane eight: bottoms where crank angle + pin angle = bank axis + 180 (computed; common practice, no source)', () => {
    expect(turningPlan(eight([0, 90, 270, 180]), { reach: 0, start: 0 })).toEqual([
      { angle: 45, rods: [4, 6] },
      { angle: 135, rods: [2, 5] },
      { angle: 225, rods: [1, 7] },
      { angle: 315, rods: [3, 8] },
    ]);
  });

  it('flat-plane eight: all pins in one plane, 180 apart (encyclopaedia article "Flat-plane crank")', () => {
    expect([...pinAngles(eight([0, 180, 180, 0])).values()]).toEqual([0, 180, 180, 0, 0, 180, 180, 0]);
  });

  // TDC = place in the firing order × 720/n, bottom 180 later: four-stroke cycle of 720 degrees, from memory
  it.each([
    [[1, 2, 4, 5, 3], 144],
    [[1, 5, 3, 6, 2, 4], 120],
    [[1, 6, 2, 5, 8, 3, 7, 4], 90],
    [[1, 10, 9, 4, 3, 6, 5, 8, 7, 2], 72],
  ])('firing order %o: one cylinder after the other every %d degrees', (order, interval) => {
    const stops = turningPlan(inline(order), { reach: 0, start: 0 });
    const bottoms = order.map((rod) => stops.find(({ rods }) => rods.includes(rod))?.angle);
    expect(bottoms).toEqual(order.map((_, index) => (index * interval + 180) % 360));
  });
});
