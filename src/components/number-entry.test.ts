import { describe, expect, it } from 'vitest';
import { readTyped, showTyped, typeKey } from './number-entry';

const decimal = { kind: 'decimal', maxLength: 6 } as const;
const integer = { kind: 'integer', maxLength: 3 } as const;

describe('typeKey', () => {
  it('keeps a single leading nought', () => {
    expect(typeKey('0', '0', decimal)).toBe('0');
    expect(typeKey('0', '7', decimal)).toBe('7');
  });

  it('puts a nought before a point that comes first', () => {
    expect(typeKey('', '.', decimal)).toBe('0.');
  });

  it('takes one decimal sign only', () => {
    expect(typeKey('0.4', ',', decimal)).toBe('0.4');
  });

  it('takes no decimal sign in a whole number', () => {
    expect(typeKey('12', '.', integer)).toBe('12');
  });

  it('stops at the longest length and never ends there with a bare point', () => {
    expect(typeKey('123', '4', integer)).toBe('123');
    expect(typeKey('12345', '.', decimal)).toBe('12345');
  });
});

describe('readTyped', () => {
  it('reads a pasted figure with a comma and blanks', () => {
    expect(readTyped(' 0,051 ', decimal)).toBe('0.051');
  });

  it('leaves out a sign, a unit and an exponent', () => {
    expect(readTyped('-1.5e3 mm', decimal)).toBe('1.53');
  });
});

describe('showTyped', () => {
  it('shows the decimal sign of the shop', () => {
    expect(showTyped('0.05', ',')).toBe('0,05');
  });
});
