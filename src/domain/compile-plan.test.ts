import { describe, expect, it } from 'vitest';
import { compilePlan } from './compile-plan';
import { procedureSchema, type Procedure } from './document';
import { findStep, type Plan } from './plan';
import {
  smallEngine,
  smallHashes,
  smallPlan,
  smallProcedures,
  smallRoute,
} from '../../tests/support/small-documents';

/** Everything that must be done before a step, however far back. */
function behind(plan: Plan, id: string): Set<string> {
  const found = new Set<string>();
  const visit = (step: string) => {
    for (const need of findStep(plan, step)!.needs) {
      if (found.has(need)) continue;
      found.add(need);
      visit(need);
    }
  };
  visit(id);
  return found;
}

function needs(plan: Plan, id: string): string[] {
  return findStep(plan, id)!.needs;
}

/** A plan of one procedure on the small engine. */
function planOf(sections: unknown[], options: Record<string, string> = { plate: 'none' }): Plan {
  const procedure: Procedure = procedureSchema.parse({
    kind: 'procedure',
    id: 'p',
    revision: 1,
    name: 'P',
    sections,
  });
  return compilePlan({
    route: { ...smallRoute(), procedures: ['p'] },
    procedures: [procedure],
    engine: smallEngine(),
    options,
    hashes: { ...smallHashes, p: '5'.repeat(64) },
  });
}

const todo = (id: string, more: object = {}) => ({ id, kind: 'do', title: id, ...more });
const hold = (id: string, more: object = {}) => ({
  id,
  kind: 'hold',
  title: id,
  class: 'A',
  holdPoint: 'caps-marked',
  meaning: 'Looked.',
  ...more,
});

describe('expansion', () => {
  it('repeats a loop at each turning stop, the turn first, for the rods that the stop brings down', () => {
    const plan = smallPlan();
    expect(plan.stops.map(({ rods }) => rods)).toEqual([
      [2, 3],
      [1, 4],
    ]);
    const ids = plan.steps.filter(({ phase, section }) => phase === 'build' && section === 'Caps');
    expect(ids.map(({ id }) => id)).toEqual([
      'build.turn-to@stop1',
      'build.tighten@rod2',
      'build.side@rod2',
      'build.tighten@rod3',
      'build.side@rod3',
      'build.turn-to@stop2',
      'build.tighten@rod1',
      'build.side@rod1',
      'build.tighten@rod4',
      'build.side@rod4',
    ]);
  });

  it('labels the steps of each shell by position number and U or L', () => {
    const shells = smallPlan().steps.filter(({ id }) => id.startsWith('strip.shell-look@'));
    expect(shells.map(({ id }) => id.split('@')[1])).toEqual([
      '2U',
      '2L',
      '3U',
      '3L',
      '1U',
      '1L',
      '4U',
      '4L',
    ]);
    expect(shells[1]).toMatchObject({ rod: 2, half: 'L', title: 'Shell 2L' });
    expect(shells[1]).toMatchObject({ checks: [{ id: 'sound', ask: 'Is shell 2L sound?' }] });
  });

  it('repeats a step for each rod in order of number outside a loop', () => {
    const plan = planOf([{ id: 's', name: 'S', steps: [todo('look', { each: 'rod' })] }]);
    expect(plan.steps.map(({ id }) => id)).toEqual([
      'p.look@rod1',
      'p.look@rod2',
      'p.look@rod3',
      'p.look@rod4',
    ]);
  });

  it('fills in the rod, the angle, the rods of the stop, fluids, minutes and distance', () => {
    const plan = smallPlan();
    const [first] = plan.stops;
    const titles = ['strip.turn-to@stop1', 'strip.lay@rod3', 'build.oil', 'build.warm', 'build.drive'];
    expect(titles.map((id) => findStep(plan, id)!.title)).toEqual([
      `Turn the crank to ${first!.angle}° for rods 2 and 3`,
      'Rod 3: thread laid',
      'Fill 4.2 L',
      'Warm up for 15 minutes',
      'Drive 20 km',
    ]);
  });

  it('leaves the count that a signer keys in to be filled in by the signer', () => {
    expect(findStep(smallPlan(), 'build.caps-marked')).toMatchObject({
      meaning: 'I looked at each head at the vehicle and counted {count} marks.',
    });
  });

  it('gives the bolts of a cap by rod and letter and the set that the fit uses', () => {
    const plan = smallPlan();
    expect(findStep(plan, 'strip.squeeze@rod3')).toMatchObject({ bolts: ['3A', '3B'], set: 'old' });
    expect(findStep(plan, 'strip.nip@rod3')).toMatchObject({ bolts: ['3A', '3B'], set: 'old' });
    expect(findStep(plan, 'build.tighten@rod3')).toMatchObject({ bolts: ['3A', '3B'], set: 'new' });
    expect(findStep(plan, 'build.sump-bolts')).toMatchObject({ bolts: ['sump bolts 1 to 12'] });
    expect(findStep(plan, 'build.sump-bolts')).not.toHaveProperty('set');
  });

  it('sends a new measurement and a rework back to steps of the same rod', () => {
    expect(findStep(smallPlan(), 'strip.gauge@rod4')).toMatchObject({
      measureAgainFrom: 'strip.lay@rod4',
      reworkFrom: 'strip.choose@rod4',
    });
  });

  it('carries what the route says about a hold point', () => {
    expect(findStep(smallPlan(), 'build.clear-to-close')).toMatchObject({
      roles: ['supervisor'],
      offline: 'wait',
      secondLook: true,
      gate: 'close',
      presence: 'vehicle',
    });
  });

  it('takes watch minutes, distance and unit from the engine sheet', () => {
    expect(findStep(smallPlan(), 'build.warm')).toMatchObject({ minutes: '15' });
    expect(findStep(smallPlan(), 'build.drive')).toMatchObject({ distance: '20', distanceUnit: 'km' });
  });

  it('holds nothing undefined and no number but safe integers, so that its hash is the same everywhere', () => {
    const visit = (value: unknown): void => {
      expect(value).not.toBeUndefined();
      if (typeof value === 'number') expect(Number.isSafeInteger(value)).toBe(true);
      if (typeof value === 'object' && value !== null) Object.values(value).forEach(visit);
    };
    visit(smallPlan());
    expect(smallPlan()).toEqual(smallPlan());
  });
});

describe('needs', () => {
  it('chains each rod behind the turn of its stop, and the next turn behind every rod of the stop', () => {
    const plan = smallPlan();
    expect(needs(plan, 'build.tighten@rod2')).toEqual(['build.turn-to@stop1']);
    expect(needs(plan, 'build.tighten@rod3')).toEqual(['build.turn-to@stop1']);
    expect(needs(plan, 'build.side@rod3')).toEqual(['build.tighten@rod3']);
    expect(needs(plan, 'build.turn-to@stop2')).toEqual(['build.side@rod2', 'build.side@rod3']);
  });

  it('lets nothing of a phase begin before the phase before it is done', () => {
    const plan = smallPlan();
    const before = behind(plan, 'build.turn-to@stop1');
    const phase = plan.steps.filter(
      ({ phase: id, onDemand, kind }) => id === 'strip' && !onDemand && kind !== 'witness',
    );
    expect(phase.filter(({ id }) => !before.has(id))).toEqual([]);
  });

  it('lets the steps of a free section be done in any order, and all of them before the next section', () => {
    const plan = smallPlan();
    expect(needs(plan, 'strip.rags-out')).toEqual([]);
    expect(needs(plan, 'strip.raise')).toEqual(['strip.arrival', 'strip.old-shell-kit', 'strip.rags-out']);
  });

  it('keeps everything after a hold point waiting for it, in free sections too', () => {
    const plan = planOf([
      { id: 'one', name: 'One', order: 'free', steps: [todo('a'), hold('h'), todo('b')] },
      { id: 'two', name: 'Two', needs: [], steps: [todo('c', { needs: [] }), todo('d')] },
    ]);
    for (const id of ['p.b', 'p.c', 'p.d']) expect(behind(plan, id)).toContain('p.h');
    expect(behind(plan, 'p.h')).toContain('p.a');
    expect(behind(plan, 'p.h')).not.toContain('p.b');
  });

  it('lets explicit needs replace the order of the section', () => {
    const plan = planOf([
      { id: 'one', name: 'One', steps: [todo('a'), todo('b'), todo('c', { needs: ['a'] }), todo('d')] },
    ]);
    expect(needs(plan, 'p.c')).toEqual(['p.a']);
    expect(needs(plan, 'p.d')).toEqual(['p.c']);
  });

  it('takes explicit needs of a rod from the same rod', () => {
    const plan = planOf([
      { id: 'one', name: 'One', order: 'free', steps: [todo('a', { each: 'rod' })] },
      { id: 'two', name: 'Two', order: 'free', steps: [todo('b', { each: 'rod', needs: ['p.a'] })] },
    ]);
    expect(needs(plan, 'p.b@rod3')).toEqual(['p.a@rod3']);
  });

  it('links over what the options drop', () => {
    const section = {
      id: 'one',
      name: 'One',
      steps: [todo('a'), todo('b', { when: { option: 'plate', is: 'fitted' } }), todo('c')],
    };
    expect(needs(planOf([section]), 'p.c')).toEqual(['p.a']);
    expect(needs(planOf([section], { plate: 'fitted' }), 'p.c')).toEqual(['p.b']);
  });

  it('links over a whole section that the options drop', () => {
    const plan = planOf([
      { id: 'one', name: 'One', steps: [todo('a')] },
      { id: 'two', name: 'Two', when: { option: 'plate', is: 'fitted' }, steps: [todo('b')] },
      { id: 'three', name: 'Three', steps: [todo('c')] },
    ]);
    expect(plan.steps.map(({ id }) => id)).toEqual(['p.a', 'p.c']);
    expect(needs(plan, 'p.c')).toEqual(['p.a']);
  });

  it('lets nobody wait for a witness point', () => {
    const plan = smallPlan();
    expect(needs(plan, 'strip.look')).toEqual(['strip.sump-off']);
    expect(needs(plan, 'strip.turn-to@stop1')).toEqual(['strip.sump-off']);
  });

  it('puts steps on demand in nobody’s way', () => {
    const plan = smallPlan();
    expect(findStep(plan, 'strip.park')).toMatchObject({ onDemand: true, needs: [] });
    expect(plan.steps.some((step) => step.needs.includes('strip.park'))).toBe(false);
  });

  it('points backwards only', () => {
    const plan = smallPlan();
    const position = new Map(plan.steps.map(({ id }, index) => [id, index]));
    for (const step of plan.steps) {
      for (const need of step.needs) expect(position.get(need)!).toBeLessThan(position.get(step.id)!);
    }
  });

  it('refuses a need that comes later', () => {
    expect(() =>
      planOf([{ id: 'one', name: 'One', steps: [todo('a', { needs: ['b'] }), todo('b')] }]),
    ).toThrow('"p.a" needs "p.b", which comes later.');
  });
});

describe('hold points', () => {
  it('cover their procedure up to the hold point unless they name what they cover', () => {
    const plan = smallPlan();
    const marked = findStep(plan, 'build.caps-marked');
    expect(marked).toMatchObject({
      covers: plan.phases[1]!.steps.slice(0, plan.phases[1]!.steps.indexOf('build.caps-marked')),
    });
  });

  it('cover named procedures and sections step by step, without other hold and witness points', () => {
    const plan = smallPlan();
    const step = findStep(plan, 'build.clear-to-close');
    const covers = step?.kind === 'hold' ? step.covers : [];
    expect(covers).toContain('strip.gauge@rod3');
    expect(covers).toContain('build.tighten@rod3');
    expect(covers).toContain('build.rags-in');
    expect(covers).not.toContain('strip.look');
    expect(covers).not.toContain('build.caps-marked');
    expect(covers).not.toContain('build.turns');
    expect(covers).not.toContain('strip.park');
  });
});

describe('the open list', () => {
  it('pairs what comes off, goes in or is counted out with the step that closes it', () => {
    expect(smallPlan('none').items).toEqual([
      {
        id: 'rags',
        name: 'rags',
        how: 'counted',
        opens: 'strip.rags-out',
        closes: 'build.rags-in',
        bars: ['close'],
      },
      {
        id: 'strap',
        name: 'strap',
        how: 'placed',
        opens: 'strip.strap',
        closes: 'build.strap-out',
        bars: ['move', 'handover'],
      },
      {
        id: 'tray',
        name: 'tray',
        how: 'removed',
        opens: 'strip.tray-off',
        closes: 'build.tray-on',
        bars: ['start', 'handover'],
      },
      {
        id: 'sump',
        name: 'sump',
        how: 'removed',
        opens: 'strip.sump-off',
        closes: 'build.sump-on',
        bars: ['start', 'handover'],
      },
    ]);
  });

  it('keeps a thing of each rod apart', () => {
    const plan = planOf([
      {
        id: 'off',
        name: 'Off',
        steps: [{ id: 'a', kind: 'remove', title: 'a', item: 'rod-clip', each: 'rod' }],
      },
      {
        id: 'on',
        name: 'On',
        steps: [{ id: 'b', kind: 'refit', title: 'b', item: 'rod-clip', each: 'rod' }],
      },
    ]);
    expect(plan.items[2]).toMatchObject({
      id: 'rod-clip@rod3',
      name: 'rod clip, rod 3',
      opens: 'p.a@rod3',
      closes: 'p.b@rod3',
    });
  });

  it('makes no plan in which something stays open for ever', () => {
    expect(() =>
      planOf([{ id: 'off', name: 'Off', steps: [{ id: 'a', kind: 'remove', title: 'a', item: 'tray' }] }]),
    ).toThrow('"tray" in step "p.a": never refitted.');
  });
});

describe('what does not fit', () => {
  const input = () => ({
    route: smallRoute(),
    procedures: smallProcedures(),
    engine: smallEngine(),
    options: { plate: 'fitted' } as Record<string, string>,
    hashes: smallHashes,
  });

  it('refuses an option left open, and one that the route does not ask', () => {
    expect(() => compilePlan({ ...input(), options: {} })).toThrow(
      'The option "plate" must be one of "fitted", "none".',
    );
    expect(() => compilePlan({ ...input(), options: { plate: 'none', roof: 'open' } })).toThrow(
      'The route "test-route" doesn\'t ask for "roof".',
    );
  });

  it('refuses a missing procedure, hold point, figure or hash by name', () => {
    expect(() => compilePlan({ ...input(), procedures: [] })).toThrow('"strip"');
    expect(() => compilePlan({ ...input(), hashes: {} })).toThrow(
      'The content hash of "test-route" is missing.',
    );
    expect(() => compilePlan({ ...input(), route: { ...smallRoute(), holdPoints: [] } })).toThrow(
      '"caps-marked"',
    );
    expect(() => compilePlan({ ...input(), engine: { ...smallEngine(), figures: {} } })).toThrow('"warmUp"');
  });

  it('puts the options in words', () => {
    expect(compilePlan(input()).optionWords).toEqual([
      { ask: 'Is a stiffening plate fitted?', answer: 'fitted' },
    ]);
  });
});
