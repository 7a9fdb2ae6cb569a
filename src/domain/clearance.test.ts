import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  clearanceFromCard,
  clearanceFromParts,
  clearanceFromWidth,
  judge,
  nearestBand,
  partsUncertainty,
  spread,
  taper,
  taperOf,
  threadsFor,
  type CardBand,
} from '@/domain/clearance';

const card: CardBand[] = [
  { width: 0.9, clearance: 0.08 },
  { width: 1.2, clearance: 0.06 },
  { width: 1.6, clearance: 0.05 },
  { width: 2.4, clearance: 0.03 },
];

describe('clearanceFromWidth', () => {
  it('gives a smaller clearance for a wider thread', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0.3, max: 3, noNaN: true }),
        fc.double({ min: 0.01, max: 3, noNaN: true }),
        (width, more) => {
          expect(clearanceFromWidth(0.3, width + more)).toBeLessThan(clearanceFromWidth(0.3, width));
        },
      ),
    );
  });

  it('refuses sizes that can not be', () => {
    for (const size of [0, -1, Number.NaN, Number.POSITIVE_INFINITY]) {
      expect(() => clearanceFromWidth(size, 1)).toThrow(RangeError);
      expect(() => clearanceFromWidth(1, size)).toThrow(RangeError);
    }
  });
});

describe('clearanceFromCard', () => {
  it('reads a band as printed, with half the wider of the two steps beside it', () => {
    expect(clearanceFromCard(card, 1.2)).toEqual({ clearance: 0.06, uncertainty: 0.01 });
    expect(clearanceFromCard(card, 1.6)).toEqual({ clearance: 0.05, uncertainty: 0.01 });
    expect(clearanceFromCard(card, 0.9)).toEqual({ clearance: 0.08, uncertainty: 0.01 });
    expect(clearanceFromCard(card, 2.4)).toEqual({ clearance: 0.03, uncertainty: 0.01 });
  });

  it('interpolates between two bands, with half the step between them', () => {
    const reading = clearanceFromCard(card, 1.4);
    expect(reading.clearance).toBeCloseTo(0.055, 12);
    expect(reading.uncertainty).toBe(0.005);
  });

  it('takes the bands in any order', () => {
    expect(clearanceFromCard(card.toReversed(), 1.4)).toEqual(clearanceFromCard(card, 1.4));
  });

  it('reads up to half a step off the card and no further', () => {
    expect(clearanceFromCard(card, 0.75).clearance).toBeCloseTo(0.09, 12);
    expect(clearanceFromCard(card, 2.8).clearance).toBeCloseTo(0.02, 12);
    expect(() => clearanceFromCard(card, 0.749)).toThrow('narrower than this card can tell');
    expect(() => clearanceFromCard(card, 2.801)).toThrow('wider than this card can tell');
  });

  it('never gives a wider thread the larger clearance', () => {
    const width = fc.double({ min: 0.76, max: 2.79, noNaN: true });
    fc.assert(
      fc.property(width, width, (a, b) => {
        const [narrow, wide] = [
          clearanceFromCard(card, Math.min(a, b)),
          clearanceFromCard(card, Math.max(a, b)),
        ];
        expect(wide.clearance).toBeLessThanOrEqual(narrow.clearance + 1e-12);
      }),
    );
  });

  it('refuses cards that can not be', () => {
    expect(() => clearanceFromCard([], 1)).toThrow(RangeError);
    expect(() => clearanceFromCard([{ width: 1, clearance: 0.05 }], 1)).toThrow(RangeError);
    expect(() => clearanceFromCard([...card, { width: 1.2, clearance: 0.055 }], 1.2)).toThrow(RangeError);
    expect(() => clearanceFromCard([...card, { width: 3, clearance: 0.09 }], 1.2)).toThrow(RangeError);
    expect(() => clearanceFromCard([...card, { width: -3, clearance: 0.1 }], 1.2)).toThrow(RangeError);
  });

  it('refuses a reading past the end that would be no clearance at all', () => {
    const steep: CardBand[] = [
      { width: 1, clearance: 0.06 },
      { width: 2, clearance: 0.01 },
    ];
    expect(() => clearanceFromCard(steep, 2.4)).toThrow('too far off the card');
  });
});

describe('clearanceFromParts', () => {
  it('says when the parts bind', () => {
    expect(clearanceFromParts({ housingBore: 50, upperWall: 1, lowerWall: 1, journal: 48.01 })).toBe(-0.01);
  });

  it('refuses sizes that can not be', () => {
    const parts = { housingBore: 50, upperWall: 1, lowerWall: 1, journal: 47.95 };
    for (const name of Object.keys(parts)) {
      expect(() => clearanceFromParts({ ...parts, [name]: -1 })).toThrow(RangeError);
    }
  });
});

describe('partsUncertainty', () => {
  it('is the root of the sum of four squares', () => {
    expect(partsUncertainty(0.001)).toBeCloseTo(Math.sqrt(4 * 0.001 ** 2), 12);
    expect(() => partsUncertainty(0)).toThrow(RangeError);
  });
});

describe('judge', () => {
  const limits = { low: 0.03, high: 0.07, uncertainty: 0.005 };

  it.each([
    [0.0249, 'outside'],
    [0.025, 'unsure'],
    [0.0349, 'unsure'],
    [0.035, 'inside'],
    [0.05, 'inside'],
    [0.065, 'inside'],
    [0.0651, 'unsure'],
    [0.075, 'unsure'],
    [0.0751, 'outside'],
  ] as const)('judges %d mm as %s', (value, verdict) => {
    expect(judge({ value, ...limits }).verdict).toBe(verdict);
  });

  it('is not misled by binary fractions: 0.1 + 0.2 is 0.3', () => {
    expect(judge({ value: 0.3, low: 0.1, high: 1, uncertainty: 0.2 }).verdict).toBe('inside');
  });

  it('has no unsure zone where the measurement is exact', () => {
    fc.assert(
      fc.property(fc.double({ min: -1, max: 1, noNaN: true }), (value) => {
        const { verdict, place } = judge({ value, low: 0.03, high: 0.07, uncertainty: 0 });
        expect(verdict).toBe(value >= 0.03 && value <= 0.07 ? 'inside' : 'outside');
        if (verdict === 'inside') expect(place >= 0 && place <= 1).toBe(true);
      }),
    );
  });

  it('is monotone: further from the middle is never better, and less certain never more decided', () => {
    const rank = { inside: 0, unsure: 1, outside: 2 };
    const micrometres = fc.integer({ min: 0, max: 120 });
    fc.assert(
      fc.property(
        micrometres,
        micrometres,
        fc.integer({ min: 0, max: 30 }),
        fc.boolean(),
        (a, b, u, isWide) => {
          const ask = (off: number, uncertainty: number) =>
            judge({
              value: (500 + (isWide ? off : -off)) / 10_000,
              low: 0.047,
              high: 0.053,
              uncertainty: uncertainty / 10_000,
            });
          const [near, far] = [Math.min(a, b), Math.max(a, b)];
          expect(rank[ask(near, u).verdict]).toBeLessThanOrEqual(rank[ask(far, u).verdict]);
          const [nearPlace, farPlace] = [ask(near, u).place, ask(far, u).place];
          expect(isWide ? nearPlace <= farPlace : nearPlace >= farPlace).toBe(true);
          const decided = ask(a, u).verdict;
          if (decided !== 'unsure')
            for (let less = 0; less < u; less += 5) expect(ask(a, less).verdict).toBe(decided);
        },
      ),
      { numRuns: 500 },
    );
  });

  it('places a value between its limits', () => {
    expect(judge({ value: 0.03, ...limits }).place).toBe(0);
    expect(judge({ value: 0.07, ...limits }).place).toBe(1);
    expect(judge({ value: 0.05, ...limits }).place).toBeCloseTo(0.5, 12);
    expect(judge({ value: 0.02, ...limits }).place).toBeCloseTo(-0.25, 12);
  });

  it('refuses limits and uncertainties that can not be', () => {
    expect(() => judge({ value: 1, low: 2, high: 1, uncertainty: 0 })).toThrow(RangeError);
    expect(() => judge({ value: 1, low: 1, high: 1, uncertainty: 0 })).toThrow(RangeError);
    expect(() => judge({ value: 1, low: 0, high: 2, uncertainty: -0.1 })).toThrow(RangeError);
    expect(() => judge({ value: Number.NaN, low: 0, high: 2, uncertainty: 0 })).toThrow(RangeError);
  });
});

describe('taper', () => {
  it('is the same whichever end is wider', () => {
    expect(taper(0.05, 0.047)).toBe(0.003);
    expect(taper(0.047, 0.05)).toBe(0.003);
    expect(taper(0.05, 0.05)).toBe(0);
  });

  it('refuses a clearance that can not be', () => {
    expect(() => taper(-0.05, 0.05)).toThrow(RangeError);
    expect(() => taper(0.05, Number.NaN)).toThrow(RangeError);
  });
});

describe('the taper of two readings', () => {
  const read = (clearance: number, uncertainty: number) => ({ clearance, uncertainty });

  it('is told only where it is more than both readings are unsure of together', () => {
    expect(taperOf(read(0.05, 0.002), read(0.045, 0.002))).toEqual({ taper: 0.005, isTold: true });
    expect(taperOf(read(0.05, 0.0025), read(0.045, 0.0025))).toEqual({ taper: 0.005, isTold: false });
    expect(taperOf(read(0.3, 0.1), read(0.1, 0.1))).toEqual({ taper: 0.2, isTold: false });
  });

  it('refuses an uncertainty that can not be', () => {
    expect(() => taperOf(read(0.05, -0.001), read(0.05, 0))).toThrow(RangeError);
    expect(() => taperOf(read(0.05, 0), read(0.05, Number.NaN))).toThrow(RangeError);
  });
});

describe('spread', () => {
  it('is the largest less the smallest, exactly', () => {
    expect(spread([0.05, 0.047, 0.062])).toBe(0.015);
    expect(spread([0.05])).toBe(0);
    expect(() => spread([])).toThrow(RangeError);
    expect(() => spread([0.05, -0.01])).toThrow(RangeError);
  });
});

describe('the nearest band', () => {
  const card = [
    { width: 1, clearance: 0.08 },
    { width: 1.5, clearance: 0.06 },
    { width: 2.5, clearance: 0.04 },
  ];

  it('is the one whose printed width is nearer; halfway, the one that stands for less clearance', () => {
    const clearanceAt = (width: number) => nearestBand(card, width).clearance;
    expect([0.9, 1, 1.24, 1.26, 1.9, 2.1, 2.6].map(clearanceAt)).toEqual([
      0.08, 0.08, 0.08, 0.06, 0.06, 0.04, 0.04,
    ]);
    expect([1.25, 2].map(clearanceAt)).toEqual([0.06, 0.04]);
    expect(() => nearestBand(card, 4)).toThrow('wider than this card can tell');
  });

  it('is within half a step of what the card reads between its bands', () => {
    fc.assert(
      fc.property(fc.integer({ min: 80, max: 300 }), (hundredths) => {
        const { clearance, uncertainty } = clearanceFromCard(card, hundredths / 100);
        expect(Math.abs(nearestBand(card, hundredths / 100).clearance - clearance)).toBeLessThanOrEqual(
          uncertainty + 1e-12,
        );
      }),
    );
  });
});

describe('the threads for a clearance', () => {
  it('refuses a clearance or a range that can not be', () => {
    expect(() => threadsFor(0, [])).toThrow(RangeError);
    expect(() => threadsFor(0.05, [{ name: 'fine', low: 0.08, high: 0.02 }])).toThrow('fine');
    expect(() => threadsFor(0.05, [{ name: 'fine', low: -0.02, high: 0.08 }])).toThrow(RangeError);
  });
});
