import { expect, it } from 'vitest';
import { clockSeconds, clockTime, dateAndTime, dayAndTime, dayOf, dayWords } from './time-words';

it('shows an instant as the workshop’s clock has it', () => {
  expect(clockTime('2026-10-06T09:42:05Z', 'Europe/Lisbon')).toBe('10:42');
  expect(clockSeconds('2026-10-06T09:42:05Z', 'Europe/Lisbon')).toBe('10:42:05');
  expect(dayAndTime('2026-10-06T23:30:00Z', 'Europe/Lisbon')).toBe('7 Oct, 00:30');
  expect(dateAndTime('2026-10-06T23:30:00Z', 'Europe/Lisbon')).toBe('7 Oct 2026, 00:30');
  expect(dayOf('2026-10-06T23:30:00Z', 'Europe/Lisbon')).toBe('Wed 7 Oct 2026');
});

it('shows a calendar day without shifting it', () => {
  expect(dayWords('2027-03-14')).toBe('14 Mar 2027');
  expect(dayWords('soon')).toBe('soon');
});
