import { describe, expect, it } from 'vitest';
import { bladesAround } from './feeler-blades';

const limit = { title: 'Side clearance', unit: 'mm' };

describe('the blades of a feeler set', () => {
  it('reach beyond both limits in steps of the trade', () => {
    expect(bladesAround({ ...limit, low: '0.15', high: '0.37' })).toEqual([
      ...['0.05', '0.10', '0.15', '0.20', '0.25', '0.30', '0.35', '0.40', '0.45', '0.50'],
    ]);
  });

  it('never go down to nothing', () => {
    expect(bladesAround({ ...limit, low: '0.05', high: '0.10' })[0]).toBe('0.05');
  });

  it('are not offered for what no blade can tell', () => {
    expect(bladesAround({ ...limit, unit: 'bar', low: '0.9', high: '2.8' })).toEqual([]);
    expect(bladesAround({ ...limit, low: '0.15' })).toEqual([]);
    expect(bladesAround({ ...limit, low: '1.50', high: '2.00' })).toEqual([]);
  });
});
