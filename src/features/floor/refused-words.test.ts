import { describe, expect, it } from 'vitest';
import { afterRefusal } from './refused-words';

describe('what comes after a refusal', () => {
  it('is another signature where the PIN or the evidence was the reason', () => {
    expect(afterRefusal({ code: 'pin-wrong', entry: { kind: 'signed' } })).toMatch(/sign again/);
    expect(afterRefusal({ code: 'evidence-changed', entry: { kind: 'signed' } })).toMatch(/sign again/);
  });

  it('is another change of person where that carried the wrong PIN', () => {
    expect(afterRefusal({ code: 'pin-wrong', entry: { kind: 'took-over' } })).toMatch(
      /Take the job over again/,
    );
  });

  it('is the supervisor where nobody at the tablet can mend it', () => {
    expect(afterRefusal({ code: 'signature-wrong', entry: { kind: 'done' } })).toMatch(/Tell the supervisor/);
  });

  it('is a deviation for an act that a rule forbade', () => {
    expect(afterRefusal({ code: 'not-yet', entry: { kind: 'done' } })).toMatch(/raise a deviation/);
  });
});
