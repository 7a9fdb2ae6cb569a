import { describe, expect, it } from 'vitest';
import { canStart, nextAction, recordStage, tighteningsUsed, type Programme } from '@/domain/tightening';
import type { TighteningRecord } from '@/domain/tightening';
import { shippedPlan, type ShippedRoute } from '../support/shipped-plan';

const once: Programme = {
  cycles: [
    [
      { kind: 'torque', target: 20, tolerance: 1 },
      { kind: 'angle', target: 130, tolerance: 2 },
      { kind: 'mark', colour: 'yellow' },
    ],
  ],
};

describe('a bolt that yields and may be tightened once', () => {
  const bolts = ['1A', '1B'];

  /** Tightens the cap from where it stands to the end. */
  function tighten(done: TighteningRecord[]): void {
    for (
      let action = nextAction(once, bolts, done);
      action !== null;
      action = nextAction(once, bolts, done)
    ) {
      if (action.kind !== 'stage') throw new Error(`The cap waits for a ${action.kind}.`);
      done.push(recordStage(once, action, { outcome: 'done' }));
    }
  }

  function mayStart(done: readonly TighteningRecord[]): { ok: boolean; wornOut: string[] } {
    const used = Object.fromEntries(bolts.map((bolt) => [bolt, tighteningsUsed(done, bolt)]));
    return canStart({ programme: once, bolts, used, limit: 1 });
  }

  // Training for technicians: a torque-to-yield bolt stays stretched, and once loosened it must be replaced.
  it('goes from new to tightened, and from loosened only to scrap', () => {
    const done: TighteningRecord[] = [];
    expect(mayStart(done).ok).toBe(true);
    tighten(done);
    expect(mayStart(done)).toMatchObject({ ok: false, wornOut: bolts });
    for (const bolt of bolts) done.push({ kind: 'released', bolt, unsure: false });
    expect(mayStart(done)).toMatchObject({ ok: false, wornOut: bolts });
    done.push({ kind: 'replaced', bolt: '1A' });
    expect(mayStart(done)).toMatchObject({ ok: false, wornOut: ['1B'] });
    done.push({ kind: 'replaced', bolt: '1B' });
    expect(mayStart(done).ok).toBe(true);
  });
});

// Common practice, no source: what is only tightened to measure is not the bolt that stays.
describe.each<ShippedRoute>(['merrow-s6-rod-bearings', 'corvane-v8-rod-bearings'])('%s', (route) => {
  it('measures with bolts that are not the new ones, and closes each cap for good with new ones', () => {
    const caps = shippedPlan(route).steps.flatMap((step) =>
      step.kind === 'tighten' && step.fit !== 'joint' ? [{ fit: step.fit, set: step.set }] : [],
    );
    expect(new Set(caps.map(({ fit }) => fit))).toEqual(new Set(['measuring', 'interim', 'final']));
    for (const { fit, set } of caps) expect(set === 'new', fit).toBe(fit === 'final');
  });
});
