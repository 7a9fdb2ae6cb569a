import * as z from 'zod/mini';
import type { PhotoRow } from './database';
import { callServer, type Outcome, type Trouble } from './server-call';
import type { Surroundings } from './surroundings';

const MINUTE = 60 * 1000;
const TIMEOUT_MS = 3 * MINUTE;

const stored = z.object({ hash: z.string() });

/**
 * Sends the photographs that the server lacks, oldest first. One that the server does not take is kept with
 * its reason and tried again in the next run; it does not hold up the others.
 */
export async function sendPhotos(s: Surroundings): Promise<Outcome> {
  const hashes = await s.db.photos.where('sent').equals(0).primaryKeys();
  let trouble: Trouble | undefined;
  for (const hash of hashes) {
    const [photo, bytes] = await Promise.all([s.db.photos.get(hash), s.db.photoBytes.get(hash)]);
    if (!photo || !bytes) continue;
    const sent = await sendPhoto(s, photo, bytes.bytes);
    if (sent.ok) continue;
    if (sent.offline) return sent;
    trouble ??= { ...sent, why: `A photograph was not taken: ${sent.why}` };
  }
  return trouble ?? { ok: true };
}

/**
 * A restore takes back what was sent after the backup, also where the trail has nothing missing. Once for each
 * restore; a photograph that is there is taken again without harm.
 */
export async function sendPhotosAgain({ db }: Surroundings, restoredAt: string): Promise<void> {
  await db.transaction('rw', db.meta, db.photos, async () => {
    if ((await db.meta.get('restoredAt'))?.value === restoredAt) return;
    await db.photos.toCollection().modify({ sent: 0 });
    await db.meta.put({ key: 'restoredAt', value: restoredAt });
  });
}

async function sendPhoto(s: Surroundings, { hash, type }: PhotoRow, bytes: ArrayBuffer): Promise<Outcome> {
  const answer = await callServer(s, {
    method: 'PUT',
    path: `/api/photos/${hash}`,
    bytes: { data: bytes, type },
    answer: stored,
    timeoutMs: TIMEOUT_MS,
  });
  if (answer.ok) await s.db.photos.update(hash, { sent: 1, trouble: undefined });
  else if (!answer.offline) await s.db.photos.update(hash, { trouble: answer.why });
  return answer.ok ? { ok: true } : answer;
}
