/*
 * What is only on this tablet, as one file that outlives it: the records with their signatures and sealed PINs,
 * and the bytes of photographs. Nothing is taken off the tablet by it, and the same file brought in twice, or
 * brought in and sent as well, does no harm.
 */
import { liveQuery } from 'dexie';
import { toBase64url } from '@/domain/base64url';
import type { PhotoRow } from './database';
import { readDevice } from './device';
import { instantOf, type Surroundings } from './surroundings';
import { type Sendable, refusedBefore, toWire } from './sync-push';

export interface TabletFile {
  /** What the file is to be called. */
  name: string;
  file: Blob;
  records: number;
  photographs: number;
}

/** Tells how many records and photographs such a file would hold, now and whenever that changes. */
export function watchCountForFile(
  s: Surroundings,
  listener: (count: { records: number; photographs: number }) => void,
): () => void {
  const watched = liveQuery(() => countForFile(s)).subscribe(listener);
  return () => watched.unsubscribe();
}

/** How many records and photographs such a file would hold. */
export async function countForFile({ db }: Surroundings): Promise<{ records: number; photographs: number }> {
  const [made, lost, photographs] = await Promise.all([
    db.outbox.count(),
    db.refused.filter(({ inTrail }) => inTrail === null).count(),
    db.photos.where('sent').equals(0).count(),
  ]);
  return { records: made + lost, photographs };
}

/** Makes the file of everything that is only here. */
export async function makeTabletFile(s: Pick<Surroundings, 'db' | 'newId' | 'now'>): Promise<TabletFile> {
  const { id, name } = await readDevice(s);
  const savedAt = instantOf(s.now());
  const clockOffsetMs = ((await s.db.meta.get('clock'))?.value as number | undefined) ?? 0;
  const entries = (await readUnsent(s)).map(toWire);
  const photos = await s.db.photos.where('sent').equals(0).toArray();
  const head = { v: 1, format: 'witnessmark-tablet', tablet: id, name, savedAt, clockOffsetMs, entries };
  const parts: BlobPart[] = [`${JSON.stringify(head).slice(0, -1)},"photographs":[`];
  let photographs = 0;
  for (const photo of photos) {
    const text = await photoText(s, photo);
    if (text === undefined) continue;
    // A part of its own each, so that no text grows as large as the file.
    parts.push(new Blob([photographs === 0 ? text : `,${text}`]));
    photographs += 1;
  }
  parts.push(']}');
  return {
    name: `witnessmark-tablet-${fileWord(name ?? id.slice(-8))}-${savedAt.slice(0, 16).replace(/[:T]/g, '-')}.json`,
    file: new Blob(parts, { type: 'application/json' }),
    records: entries.length,
    photographs,
  };
}

/** Every record that the server has not given back, each job's in order, and refusals that it forgot. */
async function readUnsent({ db }: Pick<Surroundings, 'db'>): Promise<Sendable[]> {
  return db.transaction('r', db.outbox, db.refused, async () => {
    const lost = await db.refused.filter(({ inTrail }) => inTrail === null).toArray();
    return [...lost.map(refusedBefore), ...(await db.outbox.orderBy(':id').toArray())];
  });
}

async function photoText(
  { db }: Pick<Surroundings, 'db'>,
  { hash, type }: PhotoRow,
): Promise<string | undefined> {
  const kept = await db.photoBytes.get(hash);
  return kept && JSON.stringify({ hash, type, bytes: toBase64url(new Uint8Array(kept.bytes)) });
}

/** Letters and digits alone, so that every disk takes the name. */
function fileWord(words: string): string {
  return (
    words
      .toLowerCase()
      .replace(/[^a-z0-9]+/g, '-')
      .replace(/^-|-$/g, '') || 'bay'
  );
}
