/*
 * Keys that a restored server has forgotten, by their people. What they signed waits and work goes on; each is
 * enrolled again, the same key, by its person's own session on this tablet, exactly as it was the first time.
 */
import type { FloorDatabase } from './database';
import type { Verdicts } from './sync-answer';
import type { Sendable } from './sync-push';

/** The server was restored to a time before the author's key was enrolled. */
const KEY_LOST = 'key-lost';

/** Whose key the server has to be told of again. */
export async function readLostKeys({ meta }: FloorDatabase): Promise<string[]> {
  return lostKeysIn((await meta.get('lostKeys'))?.value);
}

/** The same out of the row that holds it. */
export function lostKeysIn(value: unknown): string[] {
  return (value as string[] | undefined) ?? [];
}

/** Notes that the server knows these people's keys no longer; within a transaction it has to hold `meta`. */
export async function noteLostKeys(db: FloorDatabase, people: readonly string[]): Promise<void> {
  const value = [...new Set([...(await readLostKeys(db)), ...people])];
  await db.meta.put({ key: 'lostKeys', value });
}

/** Notes that the server knows a person's key again; call it inside a transaction that holds `meta`. */
export async function noteKeyKnown(db: FloorDatabase, person: string): Promise<void> {
  const lost = await readLostKeys(db);
  if (!lost.includes(person)) return;
  const value = lost.filter((one) => one !== person);
  if (value.length === 0) await db.meta.delete('lostKeys');
  else await db.meta.put({ key: 'lostKeys', value });
}

/** Learns from what the server said of records which of this tablet's keys it has forgotten. */
export async function noteLostVerdicts(
  db: FloorDatabase,
  sent: readonly Pick<Sendable, 'id' | 'key'>[],
  verdicts: Verdicts,
): Promise<void> {
  const waiting = new Set(verdicts.flatMap(({ id, code }) => (code === KEY_LOST ? [id] : [])));
  if (waiting.size === 0) return;
  const keys = new Set(sent.flatMap(({ id, key }) => (waiting.has(id) ? [key] : [])));
  await db.transaction('rw', db.authorKeys, db.meta, async () => {
    // Records of other tablets' keys, which this one brings back, are for those to see to.
    const own = (await db.authorKeys.toArray()).filter(({ id }) => keys.has(id));
    if (own.length > 0)
      await noteLostKeys(
        db,
        own.map(({ person }) => person),
      );
  });
}
