import { describe, expect, it } from 'vitest';
import { Journal } from '../../../tests/support/journal';
import { smallPlan } from '../../../tests/support/small-documents';
import type { Plan } from '@/domain/plan';
import { nextTouch, placeWords, touchAmounts, touchBolts } from './tighten-touch';

const torque = (target: string) => ({ kind: 'torque' as const, target, tolerance: '1' });
const angle = { kind: 'angle' as const, target: '90', tolerance: '4' };
const FINAL = 'build.tighten@rod1';

/** The small plan with two torques before the angle of its final fit, and two in its measuring fit. */
function planOfTwoPasses(): Plan {
  const plan = smallPlan();
  const { rodCap, rodCapMeasuring } = plan.programmes;
  const [, ...others] = rodCap!.cycles;
  return {
    ...plan,
    programmes: {
      ...plan.programmes,
      rodCap: {
        ...rodCap!,
        cycles: [[torque('8'), torque('25'), angle, { kind: 'release' }], ...others],
      },
      rodCapMeasuring: { ...rodCapMeasuring!, cycles: [[torque('8'), torque('24')]] },
    },
  };
}

function touchAt(stepId: string, hasTool?: () => boolean, actions = 0) {
  const journal = new Journal(planOfTwoPasses()).performUntil(stepId);
  for (let i = 0; i < actions; i += 1) journal.tightenOnce(stepId);
  const step = journal.step(stepId);
  if (step.kind !== 'tighten') throw new Error(`${stepId} tightens nothing`);
  const touch = nextTouch(journal.state, step, hasTool);
  if (!touch) throw new Error(`${stepId} is finished`);
  return { touch, step, state: journal.state };
}

const actionsOf = ({ touch }: ReturnType<typeof touchAt>) =>
  touch.actions.map((action) =>
    action.kind === 'stage' ? `${action.bolt}.${action.cycle}.${action.stage}` : action.kind,
  );

describe('one touch of a tightening step', () => {
  it('takes both bolts through the lower torques up to the angle, in the order of the programme', () => {
    const at = touchAt(FINAL);
    expect(actionsOf(at)).toEqual(['1A.0.0', '1B.0.0', '1A.0.1', '1B.0.1']);
    expect(touchAmounts(at.state, at.step, at.touch)).toEqual(['8 N·m', '25 N·m']);
    expect(touchBolts(at.touch)).toEqual(['1A', '1B']);
    expect(placeWords(at.state, at.step, at.touch)).toMatch(/the passes to 8 and 25 N·m$/);
  });

  it('ends before a torque whose wrench is not known yet', () => {
    expect(actionsOf(touchAt(FINAL, () => false))).toEqual(['1A.0.0', '1B.0.0']);
  });

  it('never takes two bolts through an angle', () => {
    expect(actionsOf(touchAt(FINAL, undefined, 4))).toEqual(['1A.0.2']);
  });

  it('takes every torque of a fit that comes off again', () => {
    const id = smallPlan().steps.find((step) => step.kind === 'tighten' && step.fit === 'measuring')!.id;
    expect(actionsOf(touchAt(id)).map((place) => place.slice(2))).toEqual(['.0.0', '.0.0', '.0.1', '.0.1']);
  });

  it('keeps the last torque of a joint that stays to itself', () => {
    expect(actionsOf(touchAt('build.sump-bolts'))).toHaveLength(1);
  });
});
