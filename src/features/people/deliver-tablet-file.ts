import * as z from 'zod/mini';
import type { Surroundings } from '@/offline/surroundings';
import { callServer } from '@/offline/server-call';
import { bytesOf, partsOf, type TabletFile } from './read-tablet-file';

const MINUTE = 60 * 1000;

const verdict = z.object({
  id: z.string(),
  verdict: z.enum(['recorded', 'already recorded', 'refused', 'waiting']),
  code: z.optional(z.string()),
  reason: z.optional(z.string()),
  words: z.string(),
  job: z.optional(z.string()),
  by: z.optional(z.string()),
  at: z.optional(z.string()),
});

const answer = z.object({ tablet: z.string(), verdicts: z.array(verdict) });

export type FileVerdict = z.infer<typeof verdict>;

export interface Delivery {
  /** What the tablet is called. */
  tablet?: string | undefined;
  verdicts: FileVerdict[];
  /** Photographs that the server has now. */
  photographs: number;
  /** What became of photographs that were not taken. */
  notTaken: string[];
  /** Why it ended before all of the file was in. */
  trouble?: string | undefined;
}

/**
 * Brings a tablet's file in: photographs first, because a handover among the records may wait for them. What is
 * in stays in whatever comes after, and the whole file can be brought in again.
 */
export async function deliverTabletFile(
  s: Surroundings,
  file: TabletFile,
  onProgress: (words: string) => void,
): Promise<Delivery> {
  const delivery: Delivery = { verdicts: [], photographs: 0, notTaken: [] };
  for (const [index, photo] of file.photographs.entries()) {
    onProgress(`Photograph ${index + 1} of ${file.photographs.length}`);
    const sent = await sendPhoto(s, photo);
    if (sent.ok) delivery.photographs += 1;
    else if (sent.offline) return { ...delivery, trouble: sent.why };
    else delivery.notTaken.push(`Photograph ${photo.hash.slice(0, 8)}: ${sent.why}`);
  }
  const parts = partsOf(file);
  for (const [index, body] of parts.entries()) {
    onProgress(`Records, part ${index + 1} of ${parts.length}`);
    const answered = await callServer(s, {
      method: 'POST',
      path: '/api/devices/file',
      body,
      answer,
      timeoutMs: 3 * MINUTE,
      without: 'tablet',
    });
    if (!answered.ok) return { ...delivery, trouble: answered.why };
    delivery.tablet = answered.body.tablet;
    delivery.verdicts.push(...answered.body.verdicts);
  }
  return delivery;
}

async function sendPhoto(s: Surroundings, photo: TabletFile['photographs'][number]) {
  const data = bytesOf(photo);
  if (data === undefined)
    return {
      ok: false,
      code: 'damaged',
      why: 'its bytes in the file are damaged.',
      offline: undefined,
    } as const;
  return callServer(s, {
    method: 'PUT',
    path: `/api/photos/${photo.hash}`,
    bytes: { data, type: photo.type },
    answer: z.object({ hash: z.string() }),
    timeoutMs: 3 * MINUTE,
    without: 'tablet',
  });
}
