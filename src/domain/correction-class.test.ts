import { describe, expect, it } from 'vitest';
import { correctionClass } from './correction-class';

describe('the class of a correction', () => {
  const reading = { end: 'front', clearance: '0.048', threadLot: 'G-1', cardLot: 'G-1' };
  const tool = { id: 'w1', name: 'Wrench', serial: 'TW-1', dueOn: '2026-12-31' };

  it.each([
    ['a lot', { count: 8, lot: 'A' }, { count: 8, lot: 'B' }],
    ['a lot that was left out', { count: 8 }, { count: 8, lot: 'B' }],
    ['a note', {}, { note: 'wiped first' }],
    ['the lot of a thread', reading, { ...reading, threadLot: 'G-2' }],
    ['the lot of a shell', { upper: { grade: 'red', lot: 'A' } }, { upper: { grade: 'red', lot: 'B' } }],
    [
      'a note at a check',
      { checks: [{ id: 'a', ok: true }] },
      { checks: [{ id: 'a', ok: true, note: 'n' }] },
    ],
  ])('is clerical for %s', (_, before, after) => {
    expect(correctionClass(before, after)).toBe('clerical');
  });

  it.each([
    ['a reading', reading, { ...reading, clearance: '0.058' }],
    ['a reading and its lot', reading, { ...reading, clearance: '0.058', threadLot: 'G-2' }],
    ['a grade', { upper: { grade: 'red', lot: 'A' } }, { upper: { grade: 'blue', lot: 'A' } }],
    ['a tool', { bolt: '1A', tool }, { bolt: '1A', tool: { ...tool, serial: 'TW-2' } }],
    ['a value that was left out', { bolt: '1A' }, { bolt: '1A', value: '112' }],
    ['how it came', { value: '1', how: 'typed' }, { value: '1', how: 'from the tool' }],
    ['a count', { count: 8, lot: 'A' }, { count: 7, lot: 'A' }],
    ['an answer', { checks: [{ id: 'a', ok: true }] }, { checks: [{ id: 'a', ok: false }] }],
    ['one answer fewer', { checks: [{ id: 'a', ok: true }] }, { checks: [] }],
    ['a field that every object knows', {}, { toString: 'x' }],
  ])('is substantive for %s', (_, before, after) => {
    expect(correctionClass(before, after)).toBe('substantive');
  });

  it('is none where the fields only come in another order', () => {
    expect(correctionClass({ count: 8, lot: 'A' }, { lot: 'A', count: 8 })).toBeUndefined();
  });
});
