/* Fixed seeds as tests: a chunk of them each, so that one that breaks is named soon. */
import { describe, expect, it } from 'vitest';
import { simulate, wordsOfResult } from './simulate';

const A_CHUNK = 25;

/** Tests that everything holds with so many seeds from one on. */
export function testSeeds({ from: first, seeds }: { from: number; seeds: number }): void {
  describe('the record under faults', () => {
    for (let from = first; from < first + seeds; from += A_CHUNK) {
      it(`holds with seeds ${from} to ${from + A_CHUNK - 1}`, async () => {
        for (let seed = from; seed < from + A_CHUNK; seed += 1) {
          const result = await simulate(seed);
          expect(result.broken, wordsOfResult(result)).toBeUndefined();
        }
      }, 180_000);
    }
  });
}
