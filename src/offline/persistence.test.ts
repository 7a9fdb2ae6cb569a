import { describe, expect, it } from 'vitest';
import { askToPersist } from './persistence';

describe('the records', () => {
  it('are asked to be kept only where they are not yet', async () => {
    const persist = () => Promise.reject(new Error('not needed'));
    expect(await askToPersist({ persisted: async () => true, persist })).toBe(true);
    expect(await askToPersist({ persisted: async () => false, persist: async () => false })).toBe(false);
  });
});
