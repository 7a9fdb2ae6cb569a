import { describe, expect, it } from 'vitest';
import {
  clearanceFromCard,
  clearanceFromParts,
  clearanceFromWidth,
  judge,
  taper,
  threadsFor,
  type ThreadSize,
} from '@/domain/clearance';
import { nextSteps, whyNot } from '@/domain/job';
import { rodsOf } from '@/domain/plan';
import { convert } from '@/domain/units';
import { Journal } from '../support/journal';
import { shippedPlan } from '../support/shipped-plan';
import { smallPlan } from '../support/small-documents';

describe('plastic gauging thread', () => {
  // A gauge maker's specification: the cross-section is unchanged, so clearance = constant / width. Diameters invented.
  it.each([
    [0.3, 0.025, 2.8274],
    [0.3, 0.05, 1.4137],
    [0.3, 0.076, 0.9301],
    [0.5, 0.1, 1.9635],
    [0.5, 0.15, 1.309],
  ])('a round thread of %d mm crushed to %d mm is %d mm wide', (diameter, clearance, width) => {
    expect(clearanceFromWidth(diameter, width)).toBeCloseTo(clearance, 5);
  });

  it('wider means tighter, so the widest reading is the smallest clearance (TM 10-3930-659-34 p. 2-15)', () => {
    const card = [0.025, 0.038, 0.051, 0.076].map((clearance) => ({
      clearance,
      width: (Math.PI * 0.3 ** 2) / (4 * clearance),
    }));
    const widths = [1, 1.2, 1.5, 1.9, 2.4, 2.8];
    for (const read of [
      (w: number) => clearanceFromCard(card, w).clearance,
      (w: number) => clearanceFromWidth(0.3, w),
    ]) {
      const clearances = widths.map(read);
      expect(clearances).toEqual(clearances.toSorted((a, b) => b - a));
    }
  });

  // TM 5-2420-222-34 paragraph 1-16 p. 1-7: the three threads by the colour of their sleeves
  it.each([
    ['green', [0.001, 0.003], [0.0254, 0.0762]],
    ['red', [0.002, 0.006], [0.0508, 0.1524]],
    ['blue', [0.004, 0.009], [0.1016, 0.2286]],
  ] as const)('the range of the %s thread in inches and millimetres', (_, inches, millimetres) => {
    inches.forEach((value, index) => expect(convert(value, 'in', 'mm')).toBeCloseTo(millimetres[index]!, 4));
  });

  // Trade practice, a fourth size, no source; unsure of the exact limits, hence to a hundredth.
  it('the range of the yellow thread in inches and millimetres', () => {
    expect(convert(0.009, 'in', 'mm')).toBeCloseTo(0.23, 2);
    expect(convert(0.02, 'in', 'mm')).toBeCloseTo(0.51, 2);
  });

  // The same manual's three ranges, both limits included.
  it.each([
    [0.02, []],
    [0.03, ['green']],
    [0.06, ['green', 'red']],
    [0.0762, ['green', 'red']],
    [0.12, ['red', 'blue']],
    [0.2, ['blue']],
    [0.25, []],
  ])('for %d mm of clearance the threads are %j', (clearance, usable) => {
    const inches = (name: string, low: number, high: number): ThreadSize => ({
      ...{ name, low: convert(low, 'in', 'mm'), high: convert(high, 'in', 'mm') },
    });
    const threads = [
      inches('green', 0.001, 0.003),
      inches('red', 0.002, 0.006),
      inches('blue', 0.004, 0.009),
    ];
    expect(threadsFor(clearance, threads).map(({ name }) => name)).toEqual(usable);
  });

  // US patent 3,041,747 (1962): 0.001 to 0.007 in, read to the nearest 0.001 in, which a card's steps are finer than.
  it.each(['merrow-s6-rod-bearings', 'corvane-v8-rod-bearings'] as const)(
    'the card of %s lies within the range of gauging threads and tells finer than 0.001 in',
    (route) => {
      const bands = shippedPlan(route).engine.card.bands.map(({ width, clearance }) => ({
        width: Number(width),
        clearance: Number(clearance),
      }));
      for (const { width, clearance } of bands) {
        expect(clearance).toBeLessThanOrEqual(convert(0.007, 'in', 'mm'));
        expect(2 * clearanceFromCard(bands, width).uncertainty).toBeLessThanOrEqual(
          convert(0.001, 'in', 'mm'),
        );
      }
    },
  );

  it('taper of 0.0018 and 0.0029 in is 0.0011 in, over an example limit of 0.001 (TM 9-2320-289-34 p. 3-45)', () => {
    const spread = taper(0.0018, 0.0029);
    expect(spread).toBeCloseTo(0.0011, 9);
    expect(judge({ value: spread, low: 0, high: 0.001, uncertainty: 0 }).verdict).toBe('outside');
    // Its middle reading, 0.0020, changes nothing: the ends differ most.
    expect(Math.max(taper(0.0018, 0.002), taper(0.002, 0.0029))).toBeLessThan(spread);
  });
});

describe('the limits of a big end', () => {
  // Common practice, no source.
  const limits = { low: 0.027, high: 0.076 };

  it('0.050 ± 0.002 is inside and near the middle, 0.038 inside on the tight side', () => {
    const middle = judge({ ...limits, value: 0.05, uncertainty: 0.002 });
    const tight = judge({ ...limits, value: 0.038, uncertainty: 0.002 });
    expect([middle.verdict, tight.verdict]).toEqual(['inside', 'inside']);
    expect(Math.abs(middle.place - 0.5)).toBeLessThan(0.1);
    expect(tight.place).toBeLessThan(0.25);
  });

  it.each([0.0265, 0.0765])('%d is outside where it is known exactly, and unsure within 0.002', (value) => {
    expect(judge({ ...limits, value, uncertainty: 0 }).verdict).toBe('outside');
    expect(judge({ ...limits, value, uncertainty: 0.002 }).verdict).toBe('unsure');
  });
});

describe('measuring with thread on the job', () => {
  const gauge = 'strip.gauge@rod1';

  // TM 5-2420-222-34 paragraph 1-16 p. 1-7 and others: between laying and reading the crank must not turn.
  it('forbids to turn the crank while thread is laid', () => {
    const plan = smallPlan();
    const journal = new Journal(plan).performUntil(gauge);
    expect(journal.state.rods[1]?.thread).toBe('laid');
    const turns = plan.steps.filter(({ kind }) => kind === 'turn').map(({ id }) => id);
    for (const step of nextSteps(journal.state)) expect(turns).not.toContain(step.id);
    const later = turns.filter((id) => journal.status(id) === 'open');
    expect(later.length).toBeGreaterThan(0);
    for (const id of later) expect(whyNot(journal.state, id).ok).toBe(false);
  });

  // TM 9-6115-604-34 p. 9-60 and TM 9-2320-289-34 p. 3-45: above the limit new shells and again, else the crank; below, look for the wrong shells or dirt.
  it.each(['0.010', '0.095'])(
    '%s opens a deviation with every way out, and rework goes back to the shells',
    (value) => {
      for (const disposition of ['rework', 'replace', 'scrap'] as const) {
        const journal = new Journal(smallPlan()).performUntil(gauge);
        journal.gauge(gauge, value, value);
        const outside = journal.state.deviations.filter(({ rule }) => rule === 'clearance-outside');
        expect(outside).toHaveLength(2);
        for (const { id } of outside)
          journal.record(
            'deviation-disposed',
            { deviation: id, disposition, reason: 'as the manual says' },
            { by: 'sup' },
          );
        expect(journal.status('strip.choose@rod1')).toBe('open');
      }
    },
  );

  // The manuals' order of steps (TM 5-2420-222-34, TM 5-3895-383-24 p. 8-59, TM 10-3930-659-34 p. 2-15).
  it.each(['merrow-s6-rod-bearings', 'corvane-v8-rod-bearings'] as const)(
    'goes in the order of the manuals on %s: dry, thread, tightened, cap off, read at the widest, cleaned',
    (route) => {
      const plan = shippedPlan(route);
      for (const rod of rodsOf(plan)) {
        const own = plan.steps.filter((step) => step.rod === rod && step.phase === 'measurement');
        const words = (id: string) => {
          const step = own.find((one) => one.id === `measurement.${id}@rod${rod}`);
          return { at: step ? own.indexOf(step) : -1, text: [step?.title, ...(step?.how ?? [])].join(' ') };
        };
        const order = ['cap-off', 'new-shells', 'lay-thread', 'squeeze', 'gauge', 'nip'].map(words);
        expect(order.map(({ at }) => at)).toEqual(order.map(({ at }) => at).toSorted((a, b) => a - b));
        expect(order[0]?.at).toBeGreaterThanOrEqual(0);
        expect(order[1]?.text).toMatch(/clean and dry.*free of oil/);
        expect(order[2]?.text).toMatch(/not over the edge.*about 6 mm/);
        expect(order[3]?.text).toMatch(/No impact wrench/);
        expect(order[4]?.text).toMatch(/At its widest.*its own card.*Front first, then rear/);
        expect(order[5]?.text).toMatch(/Every trace of thread off/);
      }
    },
  );
});

describe('clearance from measured parts', () => {
  it('is bore less both walls less crankpin (arithmetic; common practice, no source)', () => {
    const parts = { housingBore: 55.5, upperWall: 1.985, lowerWall: 1.985, journal: 51.48 };
    expect(clearanceFromParts(parts)).toBe(0.05);
  });
});
