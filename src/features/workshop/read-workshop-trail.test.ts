import { describe, expect, it } from 'vitest';
import type { WorkshopRecord } from '@/domain/workshop-words';
import { documentHash } from '@/offline/hashing';
import { findBreak } from './read-workshop-trail';

function chain(count: number): { entries: WorkshopRecord[]; hashes: string[] } {
  const entries: WorkshopRecord[] = [];
  const hashes: string[] = [];
  for (let seq = 1; seq <= count; seq += 1) {
    entries.push({
      ...{ seq, kind: 'pin-set', by: 'p1', author: { name: 'Odile Marsh', roles: ['owner'] } },
      ...{ at: '2031-05-06T07:00:00.000Z', recordedAt: '2031-05-06T07:00:00.000Z' },
      prev: hashes.at(-1) ?? '0'.repeat(64),
      data: { person: 'p1' },
    });
    hashes.push(documentHash(entries.at(-1)));
  }
  return { entries, hashes };
}

describe('following the workshop’s chain', () => {
  it('finds nothing in a whole one', () => {
    const { entries, hashes } = chain(5);
    expect(findBreak(entries, hashes)).toBeUndefined();
  });

  it.each([
    ['a changed entry', 3, (c: ReturnType<typeof chain>) => (c.entries[2] = { ...c.entries[2]!, by: 'p2' })],
    ['a missing entry', 2, (c: ReturnType<typeof chain>) => c.entries.splice(1, 1)],
    [
      'an entry with its hash made anew',
      4,
      (c: ReturnType<typeof chain>) => {
        c.entries[2] = { ...c.entries[2]!, by: 'p2' };
        c.hashes[2] = documentHash(c.entries[2]);
      },
    ],
  ])('finds %s', (_, seq, change) => {
    const made = chain(5);
    change(made);
    expect(findBreak(made.entries, made.hashes)).toMatchObject({ seq });
  });
});
