import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  boltStiffness,
  estimatePreload,
  nutFactorRange,
  preloadFromTorque,
  strength,
  stressArea,
  torqueFromPreload,
  travelFromAngle,
} from '@/domain/tightening';

const bolt = { diameter: 9, pitch: 1 };
const joint = { ...bolt, preload: 30_000, threadFriction: 0.12, headFriction: 0.12, headDiameter: 12 };
const parts = { shankArea: 60, shankLength: 40, threadArea: 50, threadLength: 10, modulus: 205_000 };

describe('stressArea and strength', () => {
  it('refuse sizes that can not be', () => {
    for (const size of [0, -1, Number.NaN, Infinity]) {
      expect(() => stressArea({ ...bolt, diameter: size })).toThrow('diameter must be greater than zero');
      expect(() => stressArea({ ...bolt, pitch: size })).toThrow('pitch must be greater than zero');
    }
    expect(() => stressArea({ diameter: 1.2, pitch: 1 })).toThrow('no core is left');
    expect(stressArea({ diameter: 1, pitch: 0.25 })).toBeLessThan(1);
  });

  it('knows bolts from M1.6 to M39, ends included', () => {
    expect(strength({ diameter: 1.6, pitch: 0.35, propertyClass: '8.8' }).proofLoad).toBeGreaterThan(0);
    expect(strength({ diameter: 39, pitch: 4, propertyClass: '8.8' }).proofLoad).toBeGreaterThan(0);
    expect(() => strength({ diameter: 1.5, pitch: 0.35, propertyClass: '8.8' })).toThrow('M1.6 to M39');
    for (const propertyClass of ['8.8', '10.9', '12.9'] as const) {
      expect(() => strength({ diameter: 39.1, pitch: 4, propertyClass })).toThrow('M1.6 to M39');
    }
  });

  it('refuses a class that every object knows', () => {
    expect(() => strength({ ...bolt, propertyClass: 'toString' as '8.8' })).toThrow(RangeError);
  });
});

describe('torque and preload', () => {
  it('needs the more torque, the more friction', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0, max: 0.4, noNaN: true }),
        fc.double({ min: 0, max: 0.4, noNaN: true }),
        (a, b) => {
          const [less, more] = [Math.min(a, b), Math.max(a, b)];
          const slippery = torqueFromPreload({ ...joint, threadFriction: less, headFriction: less });
          expect(slippery).toBeLessThanOrEqual(
            torqueFromPreload({ ...joint, threadFriction: more, headFriction: more }),
          );
        },
      ),
    );
  });

  it('without friction lifts by the pitch a turn, as energy has it', () => {
    const torque = torqueFromPreload({ ...joint, threadFriction: 0, headFriction: 0 });
    expect(torque * 1000 * 2 * Math.PI).toBeCloseTo(joint.preload * joint.pitch, 6);
  });

  it('refuses what can not be', () => {
    expect(() => torqueFromPreload({ ...joint, preload: -1 })).toThrow('preload must be zero or more');
    expect(() => torqueFromPreload({ ...joint, threadFriction: -0.1 })).toThrow('friction of the thread');
    expect(() => torqueFromPreload({ ...joint, headFriction: Number.NaN })).toThrow(
      'friction under the head',
    );
    expect(() => torqueFromPreload({ ...joint, headDiameter: 0 })).toThrow('friction diameter');
    const locking = Math.PI * (9 - 0.649519) * Math.cos(Math.PI / 6);
    expect(torqueFromPreload({ ...joint, threadFriction: locking * 0.995 })).toBeGreaterThan(1000);
    expect(() => torqueFromPreload({ ...joint, threadFriction: locking * 1.005 })).toThrow('no torque turns');
    expect(() => preloadFromTorque({ torque: -1, nutFactor: 0.2, diameter: 9 })).toThrow('torque must be');
    expect(() => preloadFromTorque({ torque: 1, nutFactor: 0, diameter: 9 })).toThrow('nut factor must be');
    expect(() => preloadFromTorque({ torque: 1, nutFactor: 0.2, diameter: 0 })).toThrow('diameter must be');
  });

  it('gives the lowest preload for the highest nut factor, and refuses a range that is upside down', () => {
    const estimate = estimatePreload({
      ...{ torque: 45, diameter: 9 },
      nutFactors: { low: 0.16, likely: 0.18, high: 0.3 },
    });
    expect(estimate.low).toBe(preloadFromTorque({ torque: 45, nutFactor: 0.3, diameter: 9 }));
    expect(estimate.likely).toBe(preloadFromTorque({ torque: 45, nutFactor: 0.18, diameter: 9 }));
    expect(estimate.high).toBe(preloadFromTorque({ torque: 45, nutFactor: 0.16, diameter: 9 }));
    for (const nutFactors of [
      { low: 0.2, likely: 0.18, high: 0.3 },
      { low: 0.1, likely: 0.4, high: 0.3 },
    ]) {
      expect(() => estimatePreload({ torque: 45, diameter: 9, nutFactors })).toThrow('must lie between');
    }
    expect(() => nutFactorRange(0)).toThrow(RangeError);
  });
});

describe('travelFromAngle', () => {
  it('is one pitch a turn, and refuses what can not be', () => {
    expect(travelFromAngle({ angle: 360, pitch: 1.25 })).toBe(1.25);
    expect(() => travelFromAngle({ angle: -1, pitch: 1 })).toThrow('angle must be zero or more');
    expect(() => travelFromAngle({ angle: 90, pitch: 0 })).toThrow('pitch must be greater than zero');
  });
});

describe('boltStiffness', () => {
  it('is that of a rod where the bolt has no shank, or no free thread', () => {
    const rod = { ...parts, shankLength: 0, threadLength: 50 };
    expect(boltStiffness(rod)).toBeCloseTo((50 * 205_000) / 50, 6);
    expect(boltStiffness({ ...parts, shankLength: 50, threadLength: 0 })).toBeCloseTo((60 * 205_000) / 50, 6);
  });

  it('refuses what can not be', () => {
    for (const name of ['shankArea', 'threadArea', 'modulus'] as const) {
      expect(() => boltStiffness({ ...parts, [name]: 0 })).toThrow('greater than zero');
    }
    for (const name of ['shankLength', 'threadLength'] as const) {
      expect(() => boltStiffness({ ...parts, [name]: -1 })).toThrow('zero or more');
    }
    expect(() => boltStiffness({ ...parts, shankLength: 0, threadLength: 0 })).toThrow(
      'length that stretches',
    );
  });
});
