import { describe, expect, it } from 'vitest';
import { figureText } from './figure-text';
import { answerTo, SUMS, type Sum } from './sums';

const sum = (id: Sum['id']): Sum => SUMS.find((one) => one.id === id)!;

const answer = (id: Sum['id'], values: Record<string, string>, chosen: Record<string, string> = {}) => {
  const given = answerTo(sum(id), { values, chosen });
  return 'why' in given ? given.why : given.lines.map(({ value, unit }) => `${value} ${unit}`);
};

describe('a sum of the bench', () => {
  it('shows one unit in all the others of its kind', () => {
    // Exact factors of NIST SP 811, appendix B.8, rounded to five figures
    expect(answer('units', { value: '40' })).toEqual(['29.502 lbf·ft', '354.03 lbf·in', '4.0789 kgf·m']);
    expect(answer('units', { value: '3' }, { quantity: 'length', unit: 'thou' })).toEqual([
      '0.0762 mm',
      '76.2 µm',
      '0.003 in',
    ]);
    expect(answer('units', { value: '-40' }, { quantity: 'temperature' })).toEqual(['-40 °F']);
  });

  it('takes the first unit of a quantity where the chosen one is of another', () => {
    expect(answer('units', { value: '1' }, { quantity: 'distance', unit: 'lbf·ft' })).toEqual(['0.62137 mi']);
  });

  it('gives what to set a wrench to with an adapter, and the same torque square across', () => {
    const lengths = { target: '100', wrench: '400', adapter: '100' };
    // TM 9-254, figure 4-6: 100 · 400 / (400 + 100)
    expect(answer('adapter', { ...lengths, angle: '0' })).toEqual(['80.0 N·m', '59.0 lbf·ft']);
    expect(answer('adapter', { ...lengths, angle: '90' })).toEqual(['100.0 N·m', '73.8 lbf·ft']);
  });

  it('gives a clearance in mm and inch, whatever it was measured in', () => {
    // π · 0.32² / (4 · 1.75), by hand
    expect(answer('clearance', { thread: '0.32', width: '1.75' })).toEqual(['0.046 mm', '0.0018 in']);
    expect(answer('clearance', { thread: '0.0126', width: '0.0689' }, { unit: 'in' })).toEqual([
      '0.046 mm',
      '0.0018 in',
    ]);
  });

  it('gives what a bolt carries, and its preload as a range', () => {
    // M10 × 1.5, 10.9: ISO 898-1 has 58.0 mm², 48.1 kN and 60.3 kN
    const values = { diameter: '10', pitch: '1.5', torque: '50', angle: '90' };
    expect(answer('bolt', values, { class: '10.9', state: 'lubricated' })).toEqual([
      '58.0 mm²',
      '48.1 kN',
      '60.3 kN',
      '20.8 to 34.7 kN',
      '0.375 mm',
    ]);
  });

  it('says what is still missing, and in plain words what can not be', () => {
    expect(answer('adapter', { target: '100' })).toBe('Key in: L, wrench.');
    expect(answer('units', { value: '4.' })).toBe('Key in: Value.');
    expect(answer('units', { value: '-300' }, { quantity: 'temperature' })).toMatch(/absolute zero/);
    expect(answer('adapter', { target: '100', wrench: '100', adapter: '200', angle: '180' })).toMatch(
      /reaches back past the hand/,
    );
    expect(answer('bolt', { diameter: '60', pitch: '4', torque: '0', angle: '0' })).toMatch(/M1\.6 to M39/);
  });

  it('names its formula and its source', () => {
    for (const { formula, source } of SUMS)
      expect([formula.length > 5, source.length > 5]).toEqual([true, true]);
  });
});

describe('figures', () => {
  it.each([
    [0, '0'],
    [29.502_485_971, '29.502'],
    [0.076_2, '0.0762'],
    [123_456.7, '123460'],
    [1e-7, '0.0000001'],
    [-40, '-40'],
    [100, '100'],
  ])('%d is shown as %s', (value, text) => {
    expect(figureText(value)).toBe(text);
  });
});
