import { expect, it } from 'vitest';
import { sumsAddress } from './sums-address';

it('leads to the sums, with what they begin from and the job that is gone back to', () => {
  expect(sumsAddress({})).toBe('/floor/sums');
  expect(sumsAddress({ job: 'j1', sum: 'adapter', target: undefined })).toBe(
    '/floor/sums#job=j1&sum=adapter',
  );
  expect(sumsAddress({ job: 'a&b', target: '32.5' })).toBe('/floor/sums#job=a%26b&target=32.5');
});
