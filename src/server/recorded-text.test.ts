import { describe, expect, it } from 'vitest';
import { canonicalJson } from './crypto';
import { canonicalFields, canonicalText, canonicalTextWith } from './recorded-text';

const entry = {
  v: 1,
  id: 'x',
  at: 'now',
  data: { b: [1, 'ü'], a: { d: null, c: true } },
  with: [],
  '\u00e4': 'ö',
};
const added = {
  seq: 4,
  prev: '0',
  clockOffsetMs: -3,
  recordedAt: 'then',
  pin: { keyId: 'k', checkedAt: 't' },
};

describe('the text of an entry', () => {
  it('is its canonical form', () => {
    expect(canonicalText(canonicalFields(entry))).toBe(canonicalJson(entry));
  });

  it('with what the server adds is the canonical form of both together', () => {
    expect(canonicalTextWith(canonicalFields(entry), added)).toBe(canonicalJson({ ...entry, ...added }));
  });

  it('of an object without fields is empty braces', () => {
    expect(canonicalText(canonicalFields({}))).toBe('{}');
  });
});
