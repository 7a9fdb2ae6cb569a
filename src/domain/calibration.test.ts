import { describe, expect, it } from 'vitest';
import {
  calibrationPoints,
  type CalibratedTool,
  type CalibrationReading,
  isMeasured,
  judgeCalibration,
  missingForJudgement,
} from './calibration';

const wrench: CalibratedTool = {
  ...{ kind: 'torque wrench', rangeLow: '20', rangeHigh: '100', unit: 'N·m' },
  ...{ torqueType: 'II', torqueClass: 'A' },
};

function pulls(set: string, references = [set, set, set, set, set], unit = 'N·m'): CalibrationReading[] {
  return references.map((reference) => ({ set, reference, unit }));
}

const good = () => [...pulls('20'), ...pulls('60'), ...pulls('100')];

describe('judging a calibration', () => {
  it('passes five good readings at each of the three points, and gives every deviation', () => {
    const judged = judgeCalibration(wrench, [
      ...pulls('100'),
      ...pulls('20', ['19.5', '20', '20', '20', '20.4']),
      ...pulls('60'),
    ]);
    expect(judged).toMatchObject({ verdict: 'passed', limitPercent: 4, reasons: [] });
    expect(judged.points.map(({ set }) => set)).toEqual(['20', '60', '100']);
    expect(judged.points[0]?.readings.map((reading) => reading.deviationPercent)).toEqual([
      '2.564',
      '0.000',
      '0.000',
      '0.000',
      '-1.961',
    ]);
  });

  // As doubles, (20.8 − 20) / 20 · 100 is more than 4.
  it.each([
    ['20.8', '20', true],
    ['20.801', '20', false],
    ['57.6', '60', true],
    ['57.599', '60', false],
  ])('compares exactly, the limit counted in: %s against %s', (set, reference, isWithin) => {
    const { points } = judgeCalibration(wrench, pulls(set, [reference, set, set, set, set]));
    expect(points[0]?.readings[0]?.isWithin).toBe(isWithin);
    expect(points[0]?.reasons.length).toBe(isWithin ? 0 : 1);
  });

  it('fails for one reading that is too far off, and says where and by how much', () => {
    const judged = judgeCalibration(wrench, [
      ...pulls('20'),
      ...pulls('60', ['60', '57', '60', '66', '60']),
      ...pulls('100'),
    ]);
    expect(judged.verdict).toBe('failed');
    expect(judged.reasons).toEqual(['at 60 N·m 2 of 5 are off by more than ± 4 %, the worst by −9.091 %']);
    expect(judged.points.map(({ isPassed }) => isPassed)).toEqual([true, false, true]);
  });

  it('fails for too few readings at a point', () => {
    expect(judgeCalibration(wrench, good().slice(1)).reasons).toEqual([
      'at 20 N·m there are 4 readings, and 5 are needed',
    ]);
    expect(judgeCalibration(wrench, good().slice(4)).reasons).toEqual([
      'at 20 N·m there is 1 reading, and 5 are needed',
    ]);
  });

  it('fails for points that are missing, and names them', () => {
    expect(judgeCalibration(wrench, [])).toMatchObject({
      verdict: 'failed',
      reasons: [
        'there are no readings at 20 N·m, the lowest that it is trusted at',
        'there are no readings at about 60 N·m',
        'there are no readings at 100 N·m, its largest torque',
      ],
    });
  });

  it.each([
    ['54.9', false],
    ['55', true],
    ['65', true],
    ['65.1', false],
  ])('takes %s of 100 N·m as the middle point: %s', (middle, isTaken) => {
    const judged = judgeCalibration(wrench, [...pulls('20'), ...pulls(middle), ...pulls('100')]);
    expect(judged.verdict).toBe(isTaken ? 'passed' : 'failed');
  });

  it('fails for readings out of the tool’s range', () => {
    for (const set of ['19.9', '100.1']) {
      expect(judgeCalibration(wrench, [...good(), ...pulls(set)]).reasons).toEqual([
        `${set} N·m is out of its range, from 20 to 100 N·m`,
      ]);
    }
  });

  it('fails for readings in another unit, which count at no point', () => {
    const inPounds = good().map((reading) => ({ ...reading, unit: 'lbf·ft' }));
    const { verdict, reasons, points } = judgeCalibration(wrench, inPounds);
    expect([verdict, points]).toEqual(['failed', []]);
    expect(reasons[0]).toBe('some readings are in lbf·ft, and it is marked in N·m');
  });

  it('counts readings at one value written in two ways together', () => {
    const judged = judgeCalibration(wrench, [...good().slice(1), ...pulls('20.0', ['20.1'])]);
    expect(judged.verdict).toBe('passed');
  });

  it('does not judge other kinds of tool', () => {
    const micrometer = { ...wrench, kind: 'micrometer', unit: 'mm' };
    const nothing = { verdict: 'not judged', limitPercent: null, points: [], reasons: [] };
    expect(judgeCalibration(micrometer, pulls('25'))).toEqual(nothing);
    expect(missingForJudgement(micrometer)).toEqual([]);
  });

  it.each(['0', '-5', '', 'x', '1e3', '5,2', '007'])('throws on "%s" for a reading', (nonsense) => {
    expect(isMeasured(nonsense)).toBe(false);
    expect(() => judgeCalibration(wrench, pulls(nonsense, ['20']))).toThrow(RangeError);
    expect(() => judgeCalibration(wrench, pulls('20', [nonsense]))).toThrow(RangeError);
    expect(() => judgeCalibration(wrench, pulls('20', [nonsense], 'lbf·ft'))).toThrow(RangeError);
  });

  it('throws on a tool of which too little is known, and says what is missing', () => {
    const missing = (over: Partial<CalibratedTool>) => missingForJudgement({ ...wrench, ...over });
    expect(missing({})).toEqual([]);
    expect(missing({ torqueType: null })).toEqual(['its type and class']);
    expect(missing({ torqueClass: undefined })).toEqual(['its type and class']);
    expect(missing({ torqueType: 'I', torqueClass: 'F' })).toEqual(['its type and class']);
    expect(missing({ rangeHigh: null })).toEqual(['its range']);
    expect(missing({ rangeHigh: '0' })).toEqual(['its range']);
    expect(missing({ rangeLow: '101' })).toEqual(['its range']);
    expect(missing({ unit: 'bar' })).toEqual(['its unit of torque']);
    expect(missing({ unit: null })).toEqual(['its unit of torque']);
    expect(() => judgeCalibration({ ...wrench, torqueType: null }, good())).toThrow(
      'its type and class must be known first',
    );
    expect(() => calibrationPoints({ ...wrench, unit: null })).toThrow(RangeError);
  });
});

describe('the points of a calibration', () => {
  it.each([
    ['4', '25', ['4', '15', '25']],
    ['0', '50', ['10', '30', '50']],
    [null, '12.5', ['2.5', '7.5', '12.5']],
    ['80', '100', ['80', '100']],
    ['60', '60', ['60']],
  ])('from %s to %s are %j', (rangeLow, rangeHigh, points) => {
    const tool = { ...wrench, rangeLow, rangeHigh };
    expect(calibrationPoints(tool)).toEqual(points);
    expect(
      judgeCalibration(
        tool,
        points.flatMap((set) => pulls(set)),
      ).verdict,
    ).toBe('passed');
  });

  it('judge a tool that is marked in another unit by its largest torque in N·m', () => {
    const tool = { ...wrench, rangeLow: '20', rangeHigh: '80', unit: 'lbf·in' };
    const inInches = ['20', '48', '80'].flatMap((set) => pulls(set, undefined, 'lbf·in'));
    expect(judgeCalibration(tool, inInches)).toMatchObject({ verdict: 'passed', limitPercent: 6 });
  });
});
