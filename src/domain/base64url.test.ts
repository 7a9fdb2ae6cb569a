import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { fromBase64url, toBase64url } from '@/domain/base64url';

describe('base64url', () => {
  it('writes what Node writes and reads it back', () => {
    fc.assert(
      fc.property(fc.uint8Array({ maxLength: 70 }), (bytes) => {
        const text = toBase64url(bytes);
        expect(text).toBe(Buffer.from(bytes).toString('base64url'));
        expect([...fromBase64url(text)]).toEqual([...bytes]);
      }),
    );
  });

  it('takes one text only for the same bytes', () => {
    fc.assert(
      fc.property(fc.stringMatching(/^[A-Za-z0-9_-]{1,12}$/), (text) => {
        try {
          expect(toBase64url(fromBase64url(text))).toBe(text);
        } catch (error) {
          if (!(error instanceof RangeError)) throw error;
          expect(Buffer.from(text, 'base64url').toString('base64url')).not.toBe(text);
        }
      }),
    );
  });

  it.each(['A', 'AB', 'AAB', 'AA==', 'A+AA', 'A/AA', 'AA A', 'ÄAAA'])('refuses "%s"', (text) => {
    expect(() => fromBase64url(text)).toThrow(RangeError);
  });
});
