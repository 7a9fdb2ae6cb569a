import { createHash } from 'node:crypto';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { assertHashable, canonicalJson, hashJson } from '@/domain/canonical';

const sha256 = (bytes: Uint8Array): string => createHash('sha256').update(bytes).digest('hex');

describe('assertHashable', () => {
  it('accepts whole numbers, composed text, lists and objects', () => {
    expect(() =>
      assertHashable({ a: [1, -2, 'é', '😀', null, true, {}], '': Number.MAX_SAFE_INTEGER }),
    ).not.toThrow();
  });

  it.each([
    [{ data: { readings: [{ value: 1 }, { value: 0.05 }] } }, 'data.readings[1].value is 0.05'],
    [{ n: Number.NaN }, 'n is NaN'],
    [{ n: 2 ** 53 }, 'n is 9007199254740992'],
    [{ note: 'e\u0301' }, 'note is not in the composed form'],
    [{ 'e\u0301': 1 }, 'e\u0301 is not in the composed form'],
    [{ note: '\ud83d' }, 'note has half a character'],
    [{ note: 'a\ude00b' }, 'note has half a character'],
    [{ gone: undefined }, 'gone is undefined'],
    [[1, , 3], '[1] is undefined'],
    [{ f: () => 1 }, 'f is function'],
    [{ at: new Date(0) }, 'at is not plain JSON'],
    [new Map(), 'The value is not plain JSON'],
    [12n, 'The value is bigint'],
  ])('refuses %o', (value, message) => {
    expect(() => assertHashable(value)).toThrow(RangeError);
    expect(() => assertHashable(value)).toThrow(message);
  });

  it('refuses nesting without end in plain words', () => {
    const deep: unknown = JSON.parse('['.repeat(100_000) + ']'.repeat(100_000));
    expect(() => assertHashable(deep)).toThrow('nested too deep');
    const circle: { self?: unknown } = {};
    circle.self = circle;
    expect(() => assertHashable(circle)).toThrow('nested too deep');
  });
});

describe('canonicalJson', () => {
  it('gives one text whatever the order the keys came in, and parses back to the same value', () => {
    const json = fc.jsonValue({ stringUnit: 'grapheme', depthSize: 'small' }).filter((value) => {
      try {
        assertHashable(value);
        return true;
      } catch {
        return false;
      }
    });
    fc.assert(
      fc.property(json, (value) => {
        const text = canonicalJson(value);
        expect(canonicalJson(JSON.parse(text))).toBe(text);
      }),
    );
    expect(canonicalJson({ b: 1, a: 2 })).toBe(canonicalJson({ a: 2, b: 1 }));
  });

  it('refuses what may not be hashed', () => {
    expect(() => canonicalJson({ value: 0.05 })).toThrow(RangeError);
    expect(() => hashJson({ value: undefined }, sha256)).toThrow(RangeError);
  });
});
