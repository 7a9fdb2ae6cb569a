import { describe, expect, it } from 'vitest';
import { judge } from '@/domain/clearance';
import { conformityProbability, cp, cpk, mean, range, sampleSd } from '@/domain/statistics';
import { roundToStep } from '@/domain/units';
import { lew, lottery, mavro, michelso, siRstv, type ReferenceSet } from './reference-sets';

/** How many digits of the certified value are reached; a double has 15 to 16. */
function digitsReached(value: number, certified: number): number {
  return value === certified ? 16 : -Math.log10(Math.abs(value / certified - 1));
}

/** A centre, and then 500 times a tenth below and a tenth above it, as the files of NIST write them. */
function aroundCentre(whole: number): number[] {
  const [centre, below, above] = ['2', '1', '3'].map((tenth) => Number(`${whole}.${tenth}`)) as [
    number,
    number,
    number,
  ];
  return [centre, ...Array.from({ length: 500 }, () => [below, above]).flat()];
}

function lag1(xs: readonly number[]): number {
  const centre = mean(xs);
  const products = xs.slice(1).map((x, index) => (x - centre) * (xs[index]! - centre));
  return (mean(products) * products.length) / (sampleSd(xs) ** 2 * (xs.length - 1));
}

// NIST StRD, univariate summary statistics, as a public repository holds the files. The values are certified to 15
// digits; the test holds the digits that were reached, so that a worse method is noticed.
describe('mean and standard deviation of certified data', () => {
  it.each<[string, ReferenceSet, number, number, number]>([
    ['Lew', lew, 200, 15, 14.5],
    ['Lottery', lottery, 218, 14.5, 14.5],
    ['Mavro', mavro, 50, 15, 12.5],
    ['Michelso', michelso, 100, 15, 13.5],
  ])('%s', (_, set, count, digitsOfMean, digitsOfSd) => {
    expect(set.data).toHaveLength(count);
    expect(digitsReached(mean(set.data), set.mean)).toBeGreaterThan(digitsOfMean);
    expect(digitsReached(sampleSd(set.data), set.sd)).toBeGreaterThan(digitsOfSd);
    expect(digitsReached(lag1(set.data), set.lag1)).toBeGreaterThan(11);
  });

  // The data themselves have no more digits than this as doubles: 1000000.1 is off by up to 6e-11, so the deviation
  // of 0.1 can be had to 9 digits at best, and to 8 around ten million. NumAcc4 from memory.
  it.each([
    ['NumAcc2', 1, 15, 14],
    ['NumAcc3', 1_000_000, 15, 9],
    ['NumAcc4', 10_000_000, 15, 8],
  ])('%s, where all but the last digits are alike', (_, whole, digitsOfMean, digitsOfSd) => {
    const data = aroundCentre(whole);
    expect(data).toHaveLength(1001);
    expect(digitsReached(mean(data), whole + 0.2)).toBeGreaterThan(digitsOfMean);
    expect(digitsReached(sampleSd(data), 0.1)).toBeGreaterThan(digitsOfSd);
    expect(Math.abs(lag1(data) - -0.999)).toBeLessThan(1e-9);
    expect(range(data)).toBe(0.2);
  });

  // NIST StRD, analysis of variance SiRstv, as a public repository holds the file: the repeatability of a gauge
  it('SiRstv: repeatability and the variance between instruments', () => {
    const within = mean(siRstv.map((readings) => sampleSd(readings) ** 2));
    const between = 5 * sampleSd(siRstv.map(mean)) ** 2;
    const certified = [
      [Math.sqrt(within), 0.104076068334656],
      [within, 0.010831828],
      [within * 20, 0.21663656],
      [between, 0.0127865654],
      [between * 4, 0.0511462616],
      [between / within, 1.18046237440255],
      [(between * 4) / (between * 4 + within * 20), 0.190999039051129],
    ] as const;
    for (const [value, expected] of certified) expect(digitsReached(value, expected)).toBeGreaterThan(9);
  });

  // GUM (JCGM 100) H.5, table H.9, as the tests of a public uncertainty calculator quote it
  it('GUM H.5: ten days of five readings of a voltage', () => {
    const days = [
      ...[10.000172, 10.000116, 10.000013, 10.000144, 10.000106],
      ...[10.000031, 10.00006, 10.000125, 10.000163, 10.000041],
    ];
    const repeats = [60, 77, 111, 101, 67, 93, 80, 73, 88, 86].map((microvolts) => microvolts * 1e-6);
    expect(Math.abs(mean(days) - 10.000097)).toBeLessThan(5e-7);
    expect(Math.abs(sampleSd(days) - 57e-6)).toBeLessThan(0.5e-6);
    const pooled = Math.sqrt(mean(repeats.map((sd) => sd ** 2)));
    expect(Math.abs(pooled - 85e-6)).toBeLessThan(0.5e-6);
    // Printed 2.25 from rounded deviations.
    expect(Math.abs((5 * sampleSd(days) ** 2) / pooled ** 2 - 2.25)).toBeLessThan(0.02);
  });
});

describe('capability', () => {
  // The tests of a public uncertainty calculator
  it.each([
    [10, 0.833333],
    [10.5, 0.416667],
  ])('from 9 to 11, mean %d and deviation 0.4: Cpk %d', (centre, expected) => {
    expect(Math.abs(cpk({ low: 9, high: 11, mean: centre, sd: 0.4 }) - expected)).toBeLessThan(1e-6);
  });

  it('and 1.242 % of it lie outside, half on either side', () => {
    const inside = (limits: { low?: number; high?: number }): number =>
      conformityProbability({ value: 10, standardUncertainty: 0.4, ...limits });
    expect(Math.abs(1 - inside({ low: 9, high: 11 }) - 0.01242)).toBeLessThan(0.00001);
    expect(Math.abs(1 - inside({ low: 9 }) - 0.00621)).toBeLessThan(0.00001);
    expect(Math.abs(1 - inside({ high: 11 }) - 0.00621)).toBeLessThan(0.00001);
  });

  // Fifty values of a sample program of a statistics package, its documentation on the web; worked out from them
  it('of fifty published values from 0.8 to 2.4: Cp 2.0057, Cpk 1.8082', () => {
    const values = [
      ...[1.38, 1.49, 1.43, 1.6, 1.59, 1.34, 1.44, 1.64, 1.83, 1.57, 1.45, 1.74, 1.61, 1.39, 1.63],
      ...[1.73, 1.61, 1.35, 1.51, 1.47, 1.46, 1.41, 1.56, 1.4, 1.58, 1.43, 1.53, 1.53, 1.58, 1.62],
      ...[1.58, 1.46, 1.26, 1.57, 1.41, 1.53, 1.36, 1.63, 1.36, 1.66, 1.49, 1.55, 1.67, 1.41, 1.39],
      ...[1.75, 1.37, 1.36, 1.86, 1.49],
    ];
    const process = { low: 0.8, high: 2.4, mean: mean(values), sd: sampleSd(values) };
    expect(values).toHaveLength(50);
    expect(Math.abs(process.mean - 1.5212)).toBeLessThan(1e-8);
    expect(Math.abs(process.sd - 0.1329514258)).toBeLessThan(1e-8);
    expect(Math.abs(cp(process) - 2.005745068)).toBeLessThan(1e-8);
    expect(Math.abs(cpk(process) - 1.8081791788)).toBeLessThan(1e-8);
    expect(range(values)).toBe(0.6);
  });
});

describe('the probability of conformity', () => {
  // JCGM 106:2012 clause 7, examples from memory (printed 0.92, 0.66 and 0.99), probabilities worked out again
  it.each([
    ['a Zener diode', { value: -5.47, standardUncertainty: 0.05, high: -5.4 }, 0.9192],
    ['an engine oil', { value: 13.6, standardUncertainty: 1.8, low: 12.5, high: 16.3 }, 0.6626],
    ['a bursting pressure', { value: 509.7, standardUncertainty: 8.6, low: 490 }, 0.989],
  ])('of %s', (_, reading, expected) => {
    expect(Math.abs(conformityProbability(reading) - expected)).toBeLessThan(0.0005);
  });
});

describe('a verdict with a guard band', () => {
  // ISO 14253-1, default rule, as accreditation bodies' pages word it; that both ends count is this program's choice.
  it.each([
    [0.0359, 'unsure'],
    [0.036, 'inside'],
    [0.05, 'inside'],
    [0.064, 'inside'],
    [0.0641, 'unsure'],
    [0.075, 'unsure'],
    [0.0761, 'outside'],
  ])('%d mm from 0.030 to 0.070 with U 0.006 is %s', (value, verdict) => {
    expect(judge({ value, low: 0.03, high: 0.07, uncertainty: 0.006 }).verdict).toBe(verdict);
  });
});

describe('rounding', () => {
  // ISO 80000-1 annex B, from memory. Rule B would send 12.25 to 12.3 and 1225 to 1230: rule A is the choice here.
  it.each([
    ['12.223', '0.1', '12.2'],
    ['12.251', '0.1', '12.3'],
    ['12.275', '0.1', '12.3'],
    ['12.25', '0.1', '12.2'],
    ['12.35', '0.1', '12.4'],
    ['1225.0', '10', '1220'],
    ['1235.0', '10', '1240'],
  ])('%s to the nearest %s is %s', (value, step, rounded) => {
    expect(String(roundToStep(Number(value), Number(step)))).toBe(rounded);
    expect(String(roundToStep(-Number(value), Number(step)))).toBe(`-${rounded}`);
  });
});
