import { describe, expect, it } from 'vitest';
import { isInstant } from './instant';

describe('a moment', () => {
  it.each([
    '2026-10-06T09:41:12Z',
    '2026-10-06T09:41:12.3Z',
    '2026-10-06T23:59:59.999Z',
    '2028-02-29T00:00:00Z',
    // RFC 3339 has a year 0000.
    '0000-02-29T00:00:00Z',
  ])('is %s', (text) => {
    expect(isInstant(text)).toBe(true);
  });

  it.each([
    ['a day that never was', '2026-02-30T09:41:12Z'],
    ['a leap day in another year', '2026-02-29T09:41:12Z'],
    ['a century without one', '2100-02-29T00:00:00Z'],
    ['a thirteenth month', '2026-13-01T09:41:12Z'],
    ['day zero', '2026-10-00T09:41:12Z'],
    ['the end of a day as an hour', '2026-10-06T24:00:00Z'],
    ['a leap second', '2026-12-31T23:59:60Z'],
    ['another zone', '2026-10-06T09:41:12+01:00'],
    ['no zone', '2026-10-06T09:41:12'],
    ['four decimals', '2026-10-06T09:41:12.1234Z'],
    ['small letters', '2026-10-06t09:41:12z'],
    ['a line after it', '2026-10-06T09:41:12Z\n'],
  ])('is not %s', (_, text) => {
    expect(isInstant(text)).toBe(false);
  });
});
