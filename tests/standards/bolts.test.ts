import { describe, expect, it } from 'vitest';
import { adapterSetting } from '@/domain/tightening';

describe('the setting of a wrench with an adapter', () => {
  it('is 66.667 in·lb for 100 at 12 and 6 inches in line (NAVEDTRA 14315, fig. 3-44 and 3-45)', () => {
    const setting = adapterSetting({ target: 100, wrenchLength: 12, adapterLength: 6, adapterAngle: 0 });
    expect(setting).toBeCloseTo(66.667, 2);
  });

  // The rule S = T·L / (L ± A): TM 55-1945-205-24-4
  it.each([
    ['lengthens', 0, 117.391],
    ['shortens', 180, 158.824],
  ])('follows the rule where the adapter %s the wrench', (_, adapterAngle, setting) => {
    const adapter = { target: 135, wrenchLength: 10, adapterLength: 1.5, adapterAngle };
    expect(adapterSetting(adapter)).toBeCloseTo(setting, 2);
  });

  // Effective length l_T + l_A·cos α: TM 9-254 fig. 4-6; square across needs no correction
  it.each([
    [0, 53.333],
    [60, 56.471],
    [90, 60],
    [180, 68.571],
  ])('follows the angle of the adapter at %d degrees', (adapterAngle, setting) => {
    const adapter = { target: 60, wrenchLength: 400, adapterLength: 50, adapterAngle };
    expect(adapterSetting(adapter)).toBeCloseTo(setting, 3);
  });
});
