import * as z from 'zod/mini';
import type { WorkshopRecord } from '@/domain/workshop-words';
import { documentHash } from '@/offline/hashing';
import { askServer } from '@/offline/use-server';

const page = z.object({
  entries: z.array(z.object({ seq: z.int(), hash: z.string(), entry: z.record(z.string(), z.unknown()) })),
  next: z.nullable(z.int()),
});

/** The workshop's trail as this browser read it, and what it found when it followed the chain. */
export interface ReadWorkshopTrail {
  entries: WorkshopRecord[];
  hashes: string[];
  /** The first entry that does not hold, and why; none if all do. */
  broken?: { seq: number; why: string } | undefined;
}

/** Reads the whole trail, a page at a time, and follows its chain. */
export async function readWorkshopTrail(): Promise<ReadWorkshopTrail> {
  const entries: WorkshopRecord[] = [];
  const hashes: string[] = [];
  let after: number | null = 0;
  while (after !== null) {
    const read: z.output<typeof page> = await askServer(`/api/workshop/trail?after=${after}&limit=500`, page);
    for (const { entry, hash } of read.entries) {
      // Its form is the server's; what is shown of it is said by its kind.
      entries.push(entry as unknown as WorkshopRecord);
      hashes.push(hash);
    }
    after = read.next;
  }
  return { entries, hashes, broken: findBreak(entries, hashes) };
}

/** Each entry hashes to its hash and names the hash before it; the first that does not, and why. */
export function findBreak(
  entries: readonly WorkshopRecord[],
  hashes: readonly string[],
): ReadWorkshopTrail['broken'] {
  let prev = '0'.repeat(64);
  for (const [index, entry] of entries.entries()) {
    const seq = index + 1;
    if (entry.seq !== seq) return { seq, why: `Number ${entry.seq} is here: an entry is missing or moved.` };
    if (entry.prev !== prev) return { seq, why: 'It does not follow the entry before it.' };
    if (documentHash(entry) !== hashes[index])
      return { seq, why: 'Its content is not what its hash was made of.' };
    prev = hashes[index] ?? '';
  }
  return undefined;
}
