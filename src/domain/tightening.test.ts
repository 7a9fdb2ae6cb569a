import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  adapterSetting,
  canStart,
  expandProgramme,
  judgeReading,
  nextAction,
  recordStage,
  tighteningsUsed,
  type Outcome,
  type Programme,
  type Stage,
  type TighteningAction,
  type TighteningRecord,
} from '@/domain/tightening';

const snug: Stage = { kind: 'torque', target: 15, tolerance: 1 };
const angle: Stage = { kind: 'angle', target: 95, tolerance: 3 };
const release: Stage = { kind: 'release' };
const mark: Stage = { kind: 'mark', colour: 'yellow' };
const twice: Programme = {
  cycles: [
    [snug, angle, release],
    [snug, angle, mark],
  ],
};
const cap = ['3A', '3B'];

/** An action in a few letters, for reading a sequence at a glance. */
function brief(action: TighteningAction | null): string {
  if (action === null) return 'finished';
  if (action.kind !== 'stage') return `${action.kind} ${action.bolt}`;
  return `${action.bolt} c${action.cycle + 1} ${action.spec.kind}`;
}

/** Answers the next action as if it had been carried out, with the given outcome for a stage. */
function carryOut(
  programme: Programme,
  action: TighteningAction,
  outcome: Outcome = 'done',
): TighteningRecord {
  if (action.kind === 'release') return { kind: 'released', bolt: action.bolt, unsure: false };
  if (action.kind === 'replace') return { kind: 'replaced', bolt: action.bolt };
  return recordStage(programme, action, { outcome });
}

/** Carries out the next actions one after the other, until the one that reads as `until`, or the end. */
function runUntil(done: TighteningRecord[], until = 'finished', programme = twice, bolts = cap): string[] {
  const seen: string[] = [];
  for (;;) {
    const action = nextAction(programme, bolts, done);
    if (action === null || brief(action) === until) return seen;
    seen.push(brief(action));
    done.push(carryOut(programme, action));
  }
}

/** Answers the next action with an outcome of its own. */
function answer(done: TighteningRecord[], outcome: Outcome): void {
  const action = nextAction(twice, cap, done);
  if (action !== null) done.push(carryOut(twice, action, outcome));
}

const wholeRun = [
  ...['3A c1 torque', '3B c1 torque', '3A c1 angle', '3B c1 angle', '3A c1 release', '3B c1 release'],
  ...['3A c2 torque', '3B c2 torque', '3A c2 angle', '3A c2 mark', '3B c2 angle', '3B c2 mark'],
];

describe('expandProgramme', () => {
  it('takes every bolt through a stage before the next begins, and marks each at its own last pass', () => {
    expect(expandProgramme(twice, cap).map(brief)).toEqual(wholeRun);
  });

  it('keeps a mark before an angle as a stage of its own', () => {
    const programme: Programme = { cycles: [[snug, mark, angle, mark]] };
    expect(expandProgramme(programme, cap).map(brief)).toEqual([
      ...['3A c1 torque', '3B c1 torque', '3A c1 mark', '3B c1 mark'],
      ...['3A c1 angle', '3A c1 mark', '3B c1 angle', '3B c1 mark'],
    ]);
  });

  it('does not join a mark to its pass in a cycle that is not the last', () => {
    const programme: Programme = { cycles: [[snug, mark], [angle]] };
    expect(expandProgramme(programme, cap).map(brief)).toEqual([
      ...['3A c1 torque', '3B c1 torque', '3A c1 mark', '3B c1 mark', '3A c2 angle', '3B c2 angle'],
    ]);
  });

  it('refuses programmes and bolts that can not be', () => {
    expect(() => expandProgramme({ cycles: [] }, cap)).toThrow(RangeError);
    expect(() => expandProgramme({ cycles: [[mark]] }, cap)).toThrow('Cycle 1 has no torque and no angle');
    expect(() => expandProgramme({ cycles: [[snug, release]] }, cap)).toThrow('last cycle');
    expect(() => expandProgramme({ cycles: [[{ ...snug, target: 0 }]] }, cap)).toThrow(RangeError);
    expect(() => expandProgramme({ cycles: [[{ ...angle, tolerance: -1 }]] }, cap)).toThrow(RangeError);
    expect(() => expandProgramme(twice, [])).toThrow(RangeError);
    expect(() => expandProgramme(twice, ['3A', '3A'])).toThrow(RangeError);
  });
});

describe('nextAction', () => {
  it('walks through the programme in its order and then is finished', () => {
    expect(runUntil([])).toEqual(wholeRun);
  });

  it('goes on after a pass that stopped short and was continued', () => {
    const done: TighteningRecord[] = [];
    answer(done, 'short and continued');
    expect(brief(nextAction(twice, cap, done))).toBe('3B c1 torque');
  });

  it.each([
    ['3A c1 torque', ['replace 3A']],
    ['3A c1 angle', ['release 3B', 'replace 3A']],
    ['3B c1 angle', ['release 3A', 'replace 3B']],
    ['3A c2 torque', ['replace 3A']],
    ['3B c2 angle', ['release 3A', 'replace 3B']],
  ])('after %s went over lets off what holds, replaces the bolt and starts the cap again', (when, first) => {
    const done: TighteningRecord[] = [];
    runUntil(done, when);
    answer(done, 'over');
    expect(runUntil(done)).toEqual([...first, ...wholeRun]);
  });

  it('starts the cap again when it is not known whether a bolt was turned', () => {
    const done: TighteningRecord[] = [];
    runUntil(done, '3B c2 angle');
    done.push({ kind: 'released', bolt: '3B', unsure: true });
    expect(nextAction(twice, cap, done)).toEqual({ kind: 'release', bolt: '3A', because: 'released' });
    expect(runUntil(done)).toEqual(['release 3A', ...wholeRun]);
  });

  it('starts the cap again when both bolts were let off at once', () => {
    const done: TighteningRecord[] = [];
    runUntil(done, '3A c2 angle');
    done.push({ kind: 'released', bolt: '3A', unsure: true }, { kind: 'released', bolt: '3B', unsure: true });
    expect(runUntil(done)).toEqual(wholeRun);
  });

  it('starts the cap again when a bolt was replaced although nothing had gone over', () => {
    const done: TighteningRecord[] = [];
    runUntil(done);
    done.push({ kind: 'replaced', bolt: '3A' });
    expect(runUntil(done)).toEqual(['release 3B', ...wholeRun]);
  });

  it('replaces both bolts where both went over', () => {
    const done: TighteningRecord[] = [];
    runUntil(done, '3A c1 angle');
    answer(done, 'over');
    done.push(recordStage(twice, { bolt: '3B', cycle: 0, stage: 1 }, { outcome: 'over' }));
    expect(runUntil(done)).toEqual(['replace 3A', 'replace 3B', ...wholeRun]);
  });

  it('does not take work on a condemned cap for work of its new start', () => {
    const done: TighteningRecord[] = [];
    runUntil(done, '3A c1 angle');
    answer(done, 'over');
    done.push(recordStage(twice, { bolt: '3B', cycle: 0, stage: 1 }, { outcome: 'done' }));
    expect(runUntil(done)).toEqual(['release 3B', 'replace 3A', ...wholeRun]);
  });

  it('asks for what was left out when a later stage was recorded first', () => {
    const done: TighteningRecord[] = [
      recordStage(twice, { bolt: '3B', cycle: 0, stage: 0 }, { outcome: 'done' }),
    ];
    expect(runUntil(done)).toEqual(wholeRun.filter((action) => action !== '3B c1 torque'));
  });

  it('passes over the records of other caps, whatever went wrong there', () => {
    const done: TighteningRecord[] = [];
    runUntil(done, '3A c1 angle');
    done.push(recordStage(twice, { bolt: '4A', cycle: 0, stage: 1 }, { outcome: 'over' }));
    expect(brief(nextAction(twice, cap, done))).toBe('3A c1 angle');
    runUntil(done);
    expect(brief(nextAction(twice, ['4A', '4B'], done))).toBe('replace 4A');
  });

  it('keeps saying what a bolt is let off for while its neighbours are let off', () => {
    const bolts = ['3A', '3B', '3C'];
    const done: TighteningRecord[] = [];
    runUntil(done, '3A c1 angle', twice, bolts);
    done.push(recordStage(twice, { bolt: '3A', cycle: 0, stage: 1 }, { outcome: 'over' }));
    done.push({ kind: 'released', bolt: '3B', unsure: false });
    expect(nextAction(twice, bolts, done)).toEqual({ kind: 'release', bolt: '3C', because: 'over' });
  });

  it('always ends once nothing more goes wrong, whatever went wrong before', () => {
    const trouble = fc.record({
      after: fc.nat(6),
      what: fc.constantFrom('over', 'unsure', 'replaced', 'again', 'out of order' as const),
      bolt: fc.constantFrom('3A', '3B', '3C'),
      cycle: fc.nat(2),
      stage: fc.nat(3),
    });
    const bolts = ['3A', '3B', '3C'];
    fc.assert(
      fc.property(fc.array(trouble, { maxLength: 8 }), (troubles) => {
        const done: TighteningRecord[] = [];
        for (const { after, what, bolt, cycle, stage } of troubles) {
          for (let i = 0; i < after; i += 1) {
            const action = nextAction(twice, bolts, done);
            if (action !== null)
              done.push(carryOut(twice, action, i % 3 === 2 ? 'short and continued' : 'done'));
          }
          const action = nextAction(twice, bolts, done);
          const last = done.at(-1);
          if (what === 'over' && action !== null) done.push(carryOut(twice, action, 'over'));
          if (what === 'unsure') done.push({ kind: 'released', bolt, unsure: true });
          if (what === 'replaced') done.push({ kind: 'replaced', bolt });
          if (what === 'again' && last !== undefined) done.push(last);
          if (what === 'out of order') {
            done.push({ kind: 'stage', bolt, cycle, stage, act: 'pass', outcome: 'done' });
          }
        }
        const rest = runUntil(done, 'finished', twice, bolts);
        expect(rest.length).toBeLessThanOrEqual(expandProgramme(twice, bolts).length + 2 * bolts.length);
        expect(nextAction(twice, bolts, done)).toBeNull();
      }),
      { numRuns: 500 },
    );
  });

  it('ends after a bounded number of acts, whatever the judgements of the readings', () => {
    const reading = fc.tuple(fc.boolean(), fc.double({ min: 0.9, max: 1.08, noNaN: true }));
    fc.assert(
      fc.property(fc.array(reading, { maxLength: 60 }), (readings) => {
        const bolts = ['3A', '3B', '3C'];
        const done: TighteningRecord[] = [];
        const coming = [...readings];
        let wentOver = 0;
        for (let action = nextAction(twice, bolts, done); action !== null;) {
          const [isContinued, share] = coming.shift() ?? [false, undefined];
          if (action.kind === 'stage' && share !== undefined && 'target' in action.spec) {
            const value = share * action.spec.target;
            const judged = judgeReading(action.spec, value);
            // What is short and not continued is no record: the same act is asked for again.
            if (judged !== 'under' || isContinued) {
              const outcome = judged === 'ok' ? 'done' : judged === 'over' ? 'over' : 'short and continued';
              done.push(recordStage(twice, action, { outcome, reading: value }));
              if (outcome === 'over') wentOver += 1;
            }
          } else {
            done.push(carryOut(twice, action));
          }
          const wholeCap = expandProgramme(twice, bolts).length + 2 * bolts.length;
          expect(done.length).toBeLessThanOrEqual((wentOver + 1) * wholeCap);
          action = nextAction(twice, bolts, done);
        }
      }),
      { numRuns: 500 },
    );
  });

  it('never asks for a turn while a bolt is condemned or has to be let off', () => {
    fc.assert(
      fc.property(
        fc.array(fc.constantFrom<Outcome>('done', 'done', 'done', 'over'), { maxLength: 40 }),
        (outcomes) => {
          const done: TighteningRecord[] = [];
          const condemned = new Set<string>();
          for (const outcome of outcomes) {
            const action = nextAction(twice, cap, done);
            if (action === null) break;
            if (action.kind === 'stage') expect([...condemned]).toEqual([]);
            if (action.kind === 'replace') condemned.delete(action.bolt);
            if (action.kind === 'stage' && outcome === 'over') condemned.add(action.bolt);
            done.push(carryOut(twice, action, outcome));
          }
        },
      ),
    );
  });
});

describe('recordStage', () => {
  it('tells the last pass of a cycle from the passes before it, the release and the mark', () => {
    const acts = expandProgramme(twice, ['3A']).map(
      (action) => recordStage(twice, action, { outcome: 'done' }).act,
    );
    expect(acts).toEqual(['pass', 'last pass', 'release', 'pass', 'last pass', 'mark']);
  });

  it('keeps the reading as it was', () => {
    const record = recordStage(twice, { bolt: '3A', cycle: 1, stage: 1 }, { outcome: 'done', reading: 96.5 });
    expect(record).toEqual({
      ...{ kind: 'stage', bolt: '3A', cycle: 1, stage: 1, act: 'last pass' },
      ...{ outcome: 'done', reading: 96.5 },
    });
  });

  it('refuses a stage that the programme does not have, and a reading that can not be', () => {
    expect(() => recordStage(twice, { bolt: '3A', cycle: 2, stage: 0 }, { outcome: 'done' })).toThrow(
      /no stage 1 in cycle 3\.$/,
    );
    const angleOf3A = { bolt: '3A', cycle: 0, stage: 1 };
    expect(() => recordStage(twice, angleOf3A, { outcome: 'done', reading: -1 })).toThrow(RangeError);
  });
});

describe('judgeReading', () => {
  it.each([
    [91.9, 'under'],
    [92, 'ok'],
    [98, 'ok'],
    [98.1, 'over'],
  ])('judges %d degrees of 95 ± 3 as %s', (reading, verdict) => {
    expect(judgeReading(angle, reading)).toBe(verdict);
  });

  it('is not misled by binary fractions', () => {
    expect(judgeReading({ kind: 'torque', target: 0.1, tolerance: 0.2 }, 0.3)).toBe('ok');
  });

  it('refuses a reading of what has none', () => {
    expect(() => judgeReading(release, 1)).toThrow('A release has no reading to judge.');
    expect(() => judgeReading(mark, 1)).toThrow(RangeError);
    expect(() => judgeReading(angle, -1)).toThrow(RangeError);
    expect(() => judgeReading(angle, Number.NaN)).toThrow(RangeError);
  });
});

describe('tighteningsUsed', () => {
  it('counts one for each cycle that reached its last pass', () => {
    const done: TighteningRecord[] = [];
    expect(tighteningsUsed(done, '3A')).toBe(0);
    runUntil(done, '3B c1 angle');
    expect([tighteningsUsed(done, '3A'), tighteningsUsed(done, '3B')]).toEqual([1, 0]);
    runUntil(done);
    expect([tighteningsUsed(done, '3A'), tighteningsUsed(done, '3B')]).toEqual([2, 2]);
  });

  it('counts the bolt that went over, and starts a new bolt at none', () => {
    const done: TighteningRecord[] = [];
    runUntil(done, '3A c2 torque');
    answer(done, 'over');
    expect(tighteningsUsed(done, '3A')).toBe(2);
    runUntil(done);
    expect([tighteningsUsed(done, '3A'), tighteningsUsed(done, '3B')]).toEqual([2, 3]);
  });

  it('counts one more where nobody knew whether the bolt was turned, but no cycle twice', () => {
    const done: TighteningRecord[] = [];
    runUntil(done, '3B c1 angle');
    done.push({ kind: 'released', bolt: '3A', unsure: true }, { kind: 'released', bolt: '3B', unsure: true });
    expect([tighteningsUsed(done, '3A'), tighteningsUsed(done, '3B')]).toEqual([1, 1]);
  });

  it('does not count a partner that was let off before its last pass', () => {
    const done: TighteningRecord[] = [];
    runUntil(done, '3A c1 angle');
    answer(done, 'over');
    runUntil(done, 'replace 3A');
    expect(tighteningsUsed(done, '3B')).toBe(0);
  });

  it('counts a last pass that was recorded twice as two', () => {
    const done: TighteningRecord[] = [];
    runUntil(done, '3B c1 angle');
    done.push(recordStage(twice, { bolt: '3A', cycle: 0, stage: 1 }, { outcome: 'done' }));
    expect(tighteningsUsed(done, '3A')).toBe(2);
  });
});

describe('canStart', () => {
  it('lets a programme start that ends at the limit, and no other', () => {
    const start = { programme: twice, bolts: cap, used: { '3A': 1 }, limit: 3 };
    expect(canStart(start)).toEqual({ ok: true, needs: 2, wornOut: [] });
    expect(canStart({ ...start, limit: 2 })).toEqual({ ok: false, needs: 2, wornOut: ['3A'] });
    expect(canStart({ ...start, limit: 1 }).wornOut).toEqual(cap);
  });

  it('leaves it to the supervisor where no limit is known', () => {
    expect(canStart({ programme: twice, bolts: cap, used: { '3A': 99 }, limit: null }).ok).toBe(true);
  });

  it('refuses counts that can not be', () => {
    const start = { programme: twice, bolts: cap, used: {}, limit: 3 };
    expect(() => canStart({ ...start, used: { '3A': -1 } })).toThrow(RangeError);
    expect(() => canStart({ ...start, limit: 1.5 })).toThrow(RangeError);
  });
});

describe('adapterSetting', () => {
  const adapter = { target: 60, wrenchLength: 400, adapterLength: 50, adapterAngle: 0 };

  it('needs a lower setting for a longer reach, and the other way round', () => {
    expect(adapterSetting(adapter)).toBeLessThan(60);
    expect(adapterSetting({ ...adapter, adapterAngle: 180 })).toBeGreaterThan(60);
    expect(adapterSetting({ ...adapter, adapterLength: 0 })).toBe(60);
  });

  it('gives a setting as long as the bolt is past the hand at all', () => {
    const nearlyBack = { ...adapter, adapterLength: 399.5, adapterAngle: 180 };
    expect(adapterSetting(nearlyBack)).toBeCloseTo((60 * 400) / 0.5, 6);
  });

  it('refuses lengths and angles that can not be', () => {
    expect(() => adapterSetting({ ...adapter, wrenchLength: 0 })).toThrow(RangeError);
    expect(() => adapterSetting({ ...adapter, adapterLength: -1 })).toThrow(RangeError);
    expect(() => adapterSetting({ ...adapter, adapterAngle: Number.NaN })).toThrow(RangeError);
    expect(() => adapterSetting({ ...adapter, adapterLength: 400, adapterAngle: 180 })).toThrow('no setting');
  });
});
