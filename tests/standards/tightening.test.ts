import { describe, expect, it } from 'vitest';
import { judge } from '@/domain/clearance';
import {
  canStart,
  expandProgramme,
  nextAction,
  recordStage,
  tighteningsUsed,
  type Programme,
  type Stage,
  type TighteningRecord,
} from '@/domain/tightening';
import { convert } from '@/domain/units';

const torque = (target: number, tolerance = 0): Stage => ({ kind: 'torque', target, tolerance });
const angle = (target: number): Stage => ({ kind: 'angle', target, tolerance: 0 });
const mark: Stage = { kind: 'mark', colour: 'yellow' };
const release: Stage = { kind: 'release' };

describe('the facts of trade (common practice, no source)', () => {
  const pass = [torque(6), torque(20), angle(130)];
  const programme: Programme = {
    cycles: [
      [...pass, release],
      [...pass, release],
      [...pass, mark],
    ],
  };
  const caps = [1, 2, 3, 4, 5, 6, 7, 8].map((rod) => [`${rod}A`, `${rod}B`]);
  const actions = caps.flatMap((bolts) => expandProgramme(programme, bolts));
  const count = (...kinds: Stage['kind'][]): number =>
    actions.filter(({ spec }) => kinds.includes(spec.kind)).length;

  it('6 N·m, 20 N·m and 130°, three times with a release between, on an eight: 16 bolts, 144 passes, 32 releases, 16 marks', () => {
    expect(new Set(actions.map(({ bolt }) => bolt)).size).toBe(16);
    expect([count('torque', 'angle'), count('release'), count('mark')]).toEqual([144, 32, 16]);
  });

  it('both bolts of a cap take a pass before the next pass begins, and each is marked at its last angle', () => {
    const done: TighteningRecord[] = [];
    const order: string[] = [];
    for (let action = nextAction(programme, ['1A', '1B'], done); action?.kind === 'stage';) {
      order.push(`${action.bolt} ${action.spec.kind}`);
      done.push(recordStage(programme, action, { outcome: 'done' }));
      action = nextAction(programme, ['1A', '1B'], done);
    }
    expect(order.slice(0, 8)).toEqual([
      ...[
        '1A torque',
        '1B torque',
        '1A torque',
        '1B torque',
        '1A angle',
        '1B angle',
        '1A release',
        '1B release',
      ],
    ]);
    expect(order.slice(-4)).toEqual(['1A angle', '1A mark', '1B angle', '1B mark']);
    expect(tighteningsUsed(done, '1A')).toBe(3);
  });
});

describe('multi-cycle programmes of public technical manuals', () => {
  const kinds = (programme: Programme): string[] =>
    expandProgramme(programme, ['1A']).map(({ spec }) => spec.kind);

  it('TM 5-2815-241-34&P p. 2-64: 70-75, 140-150 lbf·ft, loosen to 0, 25-30, 70-75, 140-150', () => {
    const programme: Programme = {
      cycles: [
        [torque(72.5, 2.5), torque(145, 5), release],
        [torque(27.5, 2.5), torque(72.5, 2.5), torque(145, 5)],
      ],
    };
    expect(kinds(programme)).toEqual(['torque', 'torque', 'release', 'torque', 'torque', 'torque']);
    expect(expandProgramme(programme, ['1A']).at(-1)?.spec).toEqual(torque(145, 5));
  });

  it('TM 10-3930-675-24-2 WP 0273 p. 16: 50, 105, 155 lbf·ft, loosen completely, and again', () => {
    const pass = [torque(50), torque(105), torque(155)];
    const programme: Programme = { cycles: [[...pass, release], pass] };
    expect(kinds(programme)).toEqual([
      ...['torque', 'torque', 'torque', 'release'],
      ...['torque', 'torque', 'torque'],
    ]);
    expect(canStart({ programme, bolts: ['1A'], used: {}, limit: 2 })).toMatchObject({ ok: true, needs: 2 });
  });

  it('TM 9-2320-366-34-4 p. 20-49: torque, alignment mark, then a sixth of a turn; the mark is needed first', () => {
    const programme: Programme = { cycles: [[torque(54, 7), mark, angle(360 / 6)]] };
    const done: TighteningRecord[] = [
      recordStage(programme, { bolt: '1A', cycle: 0, stage: 0 }, { outcome: 'done' }),
    ];
    expect(nextAction(programme, ['1A'], done)).toMatchObject({ spec: { kind: 'mark' } });
    done.push(recordStage(programme, { bolt: '1A', cycle: 0, stage: 1 }, { outcome: 'done' }));
    expect(nextAction(programme, ['1A'], done)).toMatchObject({ spec: { kind: 'angle', target: 60 } });
  });

  it('TM 5-4320-302-14 p. 6-129: 22.13 lbf·ft (30 N·m), then three times 30°', () => {
    expect(convert(22.13, 'lbf·ft', 'N·m')).toBeCloseTo(30, 2);
    const programme: Programme = { cycles: [[torque(30), angle(30), angle(30), angle(30)]] };
    const turned = expandProgramme(programme, ['1A']).map(({ spec }) =>
      spec.kind === 'angle' ? spec.target : 0,
    );
    expect(turned.reduce((sum, degrees) => sum + degrees)).toBe(90);
  });

  // TM 55-1905-223-24-1 paragraphs (10) to (12): both limits are still accepted; a bolt that stretched less is
  // tightened again, one that stretched more is replaced. A programme here has no stretch of its own to read, so
  // this holds for a limit of the sheet.
  it.each([
    [0.0134, 'outside', 'low'],
    [0.0135, 'inside', 'between'],
    [0.0185, 'inside', 'between'],
    [0.0186, 'outside', 'high'],
  ])('a bolt stretch of %d in is %s its limits: %s', (value, verdict, where) => {
    const judged = judge({ value, low: 0.0135, high: 0.0185, uncertainty: 0 });
    expect(judged.verdict).toBe(verdict);
    expect(judged.place < 0 ? 'low' : judged.place > 1 ? 'high' : 'between').toBe(where);
  });
});
