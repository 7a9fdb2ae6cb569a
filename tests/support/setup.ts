import { afterEach, beforeEach, expect, vi } from 'vitest';

/*
 * An unexpected console.error or console.warn fails the test that caused it. A test that expects one
 * replaces the spy itself: `vi.mocked(console.error).mockImplementation(() => {})`, and asserts the call.
 * An implementation given once (`mockImplementationOnce`) does not count as expecting it.
 */
beforeEach(() => {
  vi.spyOn(console, 'error');
  vi.spyOn(console, 'warn');
});

afterEach(() => {
  const noisy = [vi.mocked(console.error), vi.mocked(console.warn)].flatMap((spy) =>
    spy.getMockImplementation() === undefined ? spy.mock.calls : [],
  );
  vi.restoreAllMocks();
  expect(noisy, 'unexpected console output').toEqual([]);
});
