/*
 * Facts of the trade that the shipped procedures must keep. Each says where it comes from, or that it is
 * common practice without a source.
 */
import { describe, expect, it } from 'vitest';
import { checkDocuments } from '@/domain/check-documents';
import type { Plan, PlanStep } from '@/domain/plan';
import { rodsOf } from '@/domain/plan';
import { findShippedFolder, loadShippedDocuments, readDocumentFiles } from '@/server/shipped-documents';
import { shippedPlan, type ShippedRoute } from '../support/shipped-plan';

const routes: ShippedRoute[] = ['merrow-s6-rod-bearings', 'corvane-v8-rod-bearings'];
const richest = { steering: 'hydraulic', 'front-axle': 'driven', plate: 'fitted' };

function positionOf(plan: Plan, id: string): number {
  const found = plan.steps.findIndex((step) => step.id === id);
  expect(found, id).not.toBe(-1);
  return found;
}

function wordsOf(step: PlanStep): string {
  return [step.title, step.why ?? '', ...step.how].join(' ');
}

describe('the shipped documents', () => {
  it('pass their check without a problem or a warning', () => {
    const { problems, warnings, documents } = checkDocuments(readDocumentFiles(findShippedFolder()));
    expect(problems).toEqual([]);
    expect(warnings).toEqual([]);
    expect(documents.map(({ document }) => document.kind).sort()).toEqual(
      ['engine', 'engine', ...Array<string>(5).fill('procedure'), 'route', 'route'].sort(),
    );
  });

  it('say in each procedure that the maker, local codes and licensed practice prevail', () => {
    for (const { document } of loadShippedDocuments()) {
      if (document.kind !== 'procedure') continue;
      expect(document.intro).toContain(
        "The vehicle maker's instructions, local codes and licensed practice prevail",
      );
    }
  });

  it('have titles that can be read at arm’s length', () => {
    for (const route of routes) {
      for (const { id, title } of shippedPlan(route, richest).steps) {
        expect(title.length, `${id}: ${title}`).toBeLessThanOrEqual(60);
        expect(title, id).not.toMatch(/[{}]/);
      }
    }
  });
});

describe.each(routes)('%s', (route) => {
  // Common practice, no source.
  it('labels the old shells by position number and U or L as soon as they are out', () => {
    const plan = shippedPlan(route);
    for (const rod of rodsOf(plan)) {
      const step = plan.steps[positionOf(plan, `measurement.cap-off@rod${rod}`)]!;
      expect(step.sets).toMatchObject({ shells: 'out' });
      expect(wordsOf(step)).toContain(`${rod}U on the upper shell`);
      expect(wordsOf(step)).toContain(`${rod}L on the lower`);
    }
  });

  // Common practice, no source.
  it('rebuilds in the reverse order of the strip-down', () => {
    const plan = shippedPlan(route, richest);
    const underside = ['Underside off', 'Crankcase open'];
    const removed = plan.items.filter(
      ({ how, opens }) =>
        how === 'removed' && underside.includes(plan.steps[positionOf(plan, opens)]!.section),
    );
    expect(removed.length).toBeGreaterThan(8);
    const refitted = [...removed].sort((a, b) => positionOf(plan, a.closes) - positionOf(plan, b.closes));
    expect(refitted.map(({ id }) => id)).toEqual(removed.map(({ id }) => id).reverse());
  });

  // Common practice, no source: the engine is held before the subframe leaves, and until it carries again.
  it('holds the engine from before the subframe leaves until after it is tight again', () => {
    const plan = shippedPlan(route);
    const at = (id: string) => positionOf(plan, id);
    expect(at('strip-down.support-in')).toBeLessThan(at('strip-down.support-proved'));
    expect(at('strip-down.support-proved')).toBeLessThan(at('strip-down.subframe-down'));
    expect(at('reassembly.subframe-bolts')).toBeLessThan(at('reassembly.support-out'));
  });

  // TM 5-2420-222-34 para 1-16, page 1-7; TM 5-3895-383-24, page 8-59; TM 10-3930-659-34, page 2-15.
  it('gauges each rod in the order of the public technical manuals', () => {
    const plan = shippedPlan(route);
    const order: [step: string, words: RegExp][] = [
      ['cap-off', /cap off/],
      ['new-shells', /Bores clean and dry, backs clean and dry, tabs seated[\s\S]*wiped free of oil/],
      [
        'lay-thread',
        /As long as the shell is wide[\s\S]*not over the edge[\s\S]*6 mm off the middle[\s\S]*cap on by its marks/,
      ],
      ['squeeze', /No impact wrench/],
      [
        'gauge',
        /Cap off straight down[\s\S]*thread sticks to pin or shell[\s\S]*At its widest[\s\S]*Front first, then rear/,
      ],
      ['nip', /Every trace of thread off[\s\S]*Oil pin and shell faces[\s\S]*Cap on by its marks/],
    ];
    for (const rod of rodsOf(plan)) {
      const places = order.map(([step, words]) => {
        const place = positionOf(plan, `measurement.${step}@rod${rod}`);
        expect(wordsOf(plan.steps[place]!)).toMatch(words);
        return place;
      });
      expect(places).toEqual([...places].sort((a, b) => a - b));
    }
  });

  // PB-crush: TM 5-3805-255-14 section 00094; TM 5-3820-256-24-5, page 13.
  it('lets nobody file or lap what a shell is pressed in by', () => {
    const plan = shippedPlan(route);
    for (const rod of rodsOf(plan)) {
      const step = plan.steps[positionOf(plan, `measurement.new-shells@rod${rod}`)]!;
      expect(wordsOf(step)).toMatch(/Never file or lap cap, rod or shell/);
    }
  });

  // The same manuals as for the order: the crank stands about 30° from bottom dead centre and isn't turned until the thread is read.
  it('stops the crank about 30° short of bottom and never turns it on laid thread', () => {
    const plan = shippedPlan(route);
    for (const { pin, angle, rods } of plan.engine.crankpins) {
      for (const { rod, bankAxis } of rods) {
        const stop = plan.stops.find((one) => one.rods.includes(rod))!;
        const short = (((bankAxis + 180 - angle - stop.angle) % 360) + 360) % 360;
        expect(short, `pin ${pin}, rod ${rod}`).toBeGreaterThanOrEqual(20);
        expect(short, `pin ${pin}, rod ${rod}`).toBeLessThanOrEqual(40);
      }
    }
    let laid = 0;
    for (const step of plan.steps) {
      if (step.kind === 'turn') expect(laid, step.id).toBe(0);
      if (step.sets?.thread === 'laid') laid += 1;
      if (step.sets?.thread === 'gone') laid -= 1;
    }
    expect(plan.steps.filter(({ sets }) => sets?.thread === 'laid')).toHaveLength(rodsOf(plan).length);
  });

  // Common practice, no source.
  it('has one-use parts replaced by new ones that the kit check has given a lot', () => {
    const plan = shippedPlan(route, richest);
    const kit = new Set(plan.steps.flatMap((step) => (step.kind === 'fit' && step.lot ? [step.part] : [])));
    for (const item of plan.items) {
      const opens = plan.steps[positionOf(plan, item.opens)]!;
      const closes = plan.steps[positionOf(plan, item.closes)]!;
      if (opens.kind !== 'remove' || opens.oneUse !== true || closes.kind !== 'refit') continue;
      expect([...kit], item.id).toContain(closes.part);
    }
    for (const { grade } of plan.engine.shells.grades)
      expect([...kit]).toContain(`Big-end shells, grade ${grade}`);
  });

  // Common practice, no source: the hold points of the job, in order, each of class A and signed at the vehicle.
  it('has its three hold points before what they guard', () => {
    const plan = shippedPlan(route);
    const holds = plan.steps.filter((step) => step.kind === 'hold');
    expect(
      holds.map(({ holdPoint, offline, class: critical, presence }) => [
        holdPoint,
        offline,
        critical,
        presence,
      ]),
    ).toEqual([
      ['caps-marked', 'proceed', 'A', 'vehicle'],
      ['clear-to-close', 'wait', 'A', 'vehicle'],
      ['clear-to-start', 'wait', 'A', 'vehicle'],
    ]);
    expect(positionOf(plan, 'torque-angle.caps-marked')).toBeLessThan(
      positionOf(plan, 'reassembly.pickup-on'),
    );
    expect(positionOf(plan, 'reassembly.clear-to-close')).toBeLessThan(
      positionOf(plan, 'reassembly.sump-on'),
    );
    expect(positionOf(plan, 'warm-up-road-test.clear-to-start')).toBeLessThan(
      positionOf(plan, 'warm-up-road-test.prime'),
    );
  });

  // NAVEDTRA 14050: an engine that shows no oil pressure within 10 to 15 seconds is stopped.
  it('stops the first start when no oil pressure shows within 15 seconds', () => {
    const watch = shippedPlan(route).steps.find((step) => step.kind === 'watch');
    expect(watch?.checks[0]).toMatchObject({ atSeconds: 15, limit: 'oilPressureStart', stop: true });
  });

  it('can be run in few touches', () => {
    const plan = shippedPlan(route);
    const touches = plan.steps.reduce((sum, step) => sum + touchesOf(plan, step), 0);
    // About 300 for a six; an eight has a third more rods.
    expect(touches).toBeLessThan(plan.engine.crankpins.length === 6 ? 330 : 380);
  });
});

/** One touch a step; a torque pass or a release one for the cap, an angle or a mark one a bolt. */
function touchesOf(plan: Plan, step: PlanStep): number {
  if (step.onDemand) return 0;
  if (step.kind === 'gauge') return 4;
  if (step.kind === 'hold') return 8;
  if (step.kind !== 'tighten') return 1;
  const stages = plan.programmes[step.programme]!.cycles.flat();
  return stages.reduce(
    (sum, { kind }) => sum + (kind === 'torque' || kind === 'release' ? 1 : step.bolts.length),
    0,
  );
}
