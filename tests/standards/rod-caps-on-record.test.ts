/*
 * The facts of trade of the multi-cycle tightening, on the record of a whole job: not only the programme's
 * arithmetic, but what a tablet lets a technician record. Common practice, no source.
 */
import { beforeAll, describe, expect, it } from 'vitest';
import { nextSteps, nextTightening } from '@/domain/job';
import type { Plan, PlanStage } from '@/domain/plan';
import { Journal, torqueTool } from '../support/journal';
import { shippedPlan } from '../support/shipped-plan';

const pass = (kind: 'torque' | 'angle', target: string): PlanStage => ({
  kind,
  target,
  tolerance: kind === 'torque' ? '1' : '5',
});
const cycle = [pass('torque', '6'), pass('torque', '20'), pass('angle', '130')];

/** The eight-cylinder route with the programme of the trade's example on its rod caps. */
function eightCylinderPlan(): Plan {
  const plan = shippedPlan('corvane-v8-rod-bearings');
  const final = plan.steps.find((step) => step.kind === 'tighten' && step.fit === 'final');
  if (final?.kind !== 'tighten') throw new Error('the route has a final fit');
  const programme = plan.programmes[final.programme]!;
  const cycles: PlanStage[][] = [
    [...cycle, { kind: 'release' }],
    [...cycle, { kind: 'release' }],
    [...cycle, { kind: 'mark', colour: 'yellow' }],
  ];
  return {
    ...plan,
    engine: {
      ...plan.engine,
      boltSets: [...plan.engine.boltSets.filter(({ set }) => set !== 'new'), { set: 'new', tightenings: 3 }],
    },
    programmes: { ...plan.programmes, [final.programme]: { ...programme, cycles } },
  };
}

describe('6 N·m, 20 N·m, 130°, three times with a release between (common practice, no source)', () => {
  let journal: Journal;
  let finals: string[];

  beforeAll(() => {
    journal = new Journal(eightCylinderPlan());
    finals = journal.plan.steps.filter((s) => s.kind === 'tighten' && s.fit === 'final').map(({ id }) => id);
    for (;;) {
      const next = nextSteps(journal.state).find(({ kind }) => kind !== 'witness');
      if (!next || finals.includes(next.id)) break;
      journal.perform(next.id);
    }
  });

  it('cannot be recorded out of order on its own tablet', () => {
    const at = nextSteps(journal.state).find(({ id }) => finals.includes(id))!;
    if (at.kind !== 'tighten') throw new Error('a final fit is next');
    const next = nextTightening(journal.state, at);
    const [first, second] = at.bolts;
    expect(next).toMatchObject({ kind: 'stage', bolt: first, cycle: 0, stage: 0 });
    const target = { kind: 'torque' as const, target: '6', tolerance: '1', unit: 'N·m' as const };
    const pull = {
      bolt: first!,
      cycle: 0,
      stage: 0,
      target,
      how: 'confirmed' as const,
      outcome: 'done' as const,
      tool: torqueTool,
    };
    const on = { step: at.id };
    expect(journal.ask('tightened', pull, on)).toEqual({ ok: true });
    expect(journal.ask('tightened', { ...pull, bolt: second! }, on)).toMatchObject({ code: 'order' });
    expect(
      journal.ask('tightened', { ...pull, stage: 1, target: { ...target, target: '20' } }, on),
    ).toMatchObject({ code: 'order' });
    expect(journal.ask('tightened', { ...pull, cycle: 1 }, on)).toMatchObject({ code: 'order' });
    expect(journal.ask('released', { bolt: first!, cycle: 0, stage: 3 }, on)).toMatchObject({
      code: 'order',
    });
    expect(journal.ask('marked', { bolt: first!, cycle: 2, stage: 3, colour: 'yellow' }, on)).toMatchObject({
      code: 'order',
    });
  });

  it('gives 16 bolts, 144 passes, 32 releases and 16 marks on the record', () => {
    for (;;) {
      const next = nextSteps(journal.state).find(({ kind }) => kind !== 'witness');
      if (!next || next.kind === 'hold') break;
      journal.perform(next.id);
    }
    const on = journal.entries.filter(({ step }) => step !== undefined && finals.includes(step));
    const count = (kind: string) => on.filter((entry) => entry.kind === kind).length;
    expect(new Set(on.flatMap((e) => (e.kind === 'marked' ? [e.data.bolt] : []))).size).toBe(16);
    expect(count('tightened')).toBe(144);
    expect(count('released')).toBe(32);
    expect(count('marked')).toBe(16);
    expect(Object.values(journal.state.bolts).filter(({ marked }) => marked)).toHaveLength(16);
  });
});
