/* Run-in, warm-up and road test: what public manuals ask for, against the shipped procedures. */
import { describe, expect, it } from 'vitest';
import { findStep, type StepOf } from '@/domain/plan';
import { convert } from '@/domain/units';
import { shippedPlan, type ShippedRoute } from '../support/shipped-plan';

function warmUpOf(route: ShippedRoute): StepOf<'watch'> {
  const step = findStep(shippedPlan(route), 'warm-up-road-test.warm-up');
  if (step?.kind !== 'watch') throw new Error('There is no watch over the warm-up.');
  return step;
}

describe('figures of public manuals in the units of the sheet', () => {
  // TM 5-3805-254-14&P-1 p. 3: back off above 190 °F of coolant in the first 100 hours.
  it('190 °F is 87.78 °C', () => {
    expect(convert(190, '°F', '°C')).toBeCloseTo(87.78, 2);
  });

  // NAVEDTRA 14050, Operational testing: light loads for 500 miles.
  it('500 miles are 804.672 km', () => {
    expect(convert(500, 'mi', 'km')).toBeCloseTo(804.672, 6);
  });

  // TM 5-3895-376-14&P p. 6-2, with a note on its own figures: 250 °F is 121.1 °C, and 220 °F is 104.4 and not 100 °C.
  it('an oil at 250 °F has 121.1 °C, at 220 °F 104.4 °C', () => {
    expect(convert(250, '°F', '°C')).toBeCloseTo(121.1, 1);
    expect(convert(220, '°F', '°C')).toBeCloseTo(104.4, 1);
  });
});

describe.each<ShippedRoute>(['merrow-s6-rod-bearings', 'corvane-v8-rod-bearings'])('%s', (route) => {
  // NAVEDTRA 14050, Operational testing: no oil pressure within 10 to 15 s after the start: shut down, find the cause.
  it('stops the engine where no oil pressure shows within 15 s', () => {
    const [pressure] = warmUpOf(route).checks.filter(({ limit }) => limit === 'oilPressureStart');
    expect(pressure).toMatchObject({ stop: true });
    expect(pressure?.atSeconds).toBeGreaterThanOrEqual(10);
    expect(pressure?.atSeconds).toBeLessThanOrEqual(15);
  });

  // The same: idle until fully warm, look for leaks, listen; then stop and check the levels. TM 5-3895-376-14&P p. 6-2
  // records noise, leaks, oil temperature and oil pressure at its least and most.
  it('watches noise, leaks, temperature and pressure at idle before anything else, and then reads the level', () => {
    const watch = warmUpOf(route);
    expect(watch.how.join(' ')).toContain('Idle only');
    const asked = watch.checks.map(({ ask, limit }) => `${ask ?? ''} ${limit ?? ''}`).join(' ');
    for (const what of [/knock/, /Dry from below/, /oilTemperature/, /oilPressureStart/, /oilPressureWarm/])
      expect(asked).toMatch(what);
    const plan = shippedPlan(route);
    const at = (id: string) => plan.steps.findIndex((step) => step.id === `warm-up-road-test.${id}`);
    const order = ['warm-up', 'oil-level', 'lower', 'road-test'].map(at);
    expect(order.every((place) => place >= 0)).toBe(true);
    expect(order).toEqual(order.toSorted((a, b) => a - b));
  });

  // The same manual retorques bolts after the run; a bolt that yields is never tightened again (training page on such bolts).
  it('tightens no rod bolt again once the engine has run', () => {
    const plan = shippedPlan(route);
    const run = plan.steps.findIndex(({ id }) => id === 'warm-up-road-test.warm-up');
    const after = plan.steps.slice(run).filter((step) => step.kind === 'tighten' && step.fit !== 'joint');
    expect(after).toEqual([]);
  });
});
