import { describe, expect, it } from 'vitest';
import { pinAngles, turningPlan, type Engine } from '@/domain/crank';
import { loadShippedDocuments } from '@/server/shipped-documents';

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

  // Derived: pins that fire evenly stand 720/n less the bank angle apart ("single or offset pins", Denton, p. 107).
  it.each([
    [6, 90, 30],
    [6, 60, 60],
    [6, 120, 0],
    [8, 90, 0],
    [10, 90, -18],
    [10, 72, 0],
    [12, 60, 0],
  ])(
    '%d cylinders at %d degrees of bank: with pins %d degrees apart one rod follows the other evenly',
    (n, bank, offset) => {
      const axes = [bank / 2, -bank / 2];
      const split: Engine = {
        crankpins: axes.map((bankAxis, i) => ({
          pin: i + 1,
          angle: i === 0 ? 0 : offset,
          rods: [{ rod: i + 1, bankAxis }],
        })),
      };
      const bottomOf = (rod: number) =>
        turningPlan(split, { reach: 0, start: 0 }).find(({ rods }) => rods.includes(rod))?.angle ??
        Number.NaN;
      const between = Math.abs(bottomOf(1) - bottomOf(2));
      expect(Math.min(between, 360 - between)).toBe(720 / n);
    },
  );

  // DIN 73021 as told by an encyclopaedia page on firing order: makers deviate, so numbering is data of each engine.
  it('takes the numbers of rods and pins as they are given: another numbering turns the same', () => {
    const numbered = inline([1, 5, 3, 6, 2, 4]);
    const from = (rod: number) => 7 - rod;
    const other: Engine = {
      crankpins: numbered.crankpins.map(({ pin, angle, rods }) => ({
        ...{ pin: from(pin), angle },
        rods: rods.map(({ rod, bankAxis }) => ({ rod: from(rod), bankAxis })),
      })),
    };
    const stops = turningPlan(numbered, { reach: 10, start: 20 });
    expect(turningPlan(other, { reach: 10, start: 20 })).toEqual(
      stops.map(({ angle, rods }) => ({ angle, rods: rods.map(from).toSorted((a, b) => a - b) })),
    );
  });

  // TM 5-2420-222-34 paragraph 1-16 p. 1-7 and TM 10-3930-659-34 p. 2-15: thread is read about 30 degrees from bottom.
  it('has the shipped engines gauged about 30 degrees from the bottom', () => {
    const sheets = loadShippedDocuments().flatMap(({ document }) =>
      document.kind === 'engine' ? [document] : [],
    );
    expect(sheets.map(({ capOffset }) => capOffset)).toEqual([30, 30]);
  });
});
