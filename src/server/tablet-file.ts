import * as z from 'zod';
import { wordsOf } from '@/domain/entry-words';
import { type Actor, requireRole } from './actor';
import type { App } from './compose';
import { findDevice, lockDevice } from './devices';
import { notFound } from './errors';
import { findFold } from './job-fold';
import { uuid } from './fields';
import { judgePush } from './sync';
import { type EntryVerdict, SYNC_ENTRIES, verdictSchema } from './sync-body';
import type { ReadItem } from './sync-read';
import { appendWorkshopEntry } from './workshop-trail';

/*
 * What a tablet saved as a file is judged exactly as if the tablet had pushed it: its entries prove their authors
 * themselves. In place of the tablet's credential stands the supervisor or owner who brings the file in, and the
 * workshop's trail says so.
 */

/** A part of a tablet's file: as many entries as one push may have. Its photographs are sent as photographs are. */
export const tabletFileBody = z.strictObject({
  v: z.literal(1),
  format: z.literal('witnessmark-tablet'),
  tablet: uuid,
  /** By the tablet's clock. */
  savedAt: z.iso.datetime({ offset: false }),
  /** How far the tablet's clock was off when it last met the server, milliseconds. */
  clockOffsetMs: z.int(),
  entries: z.array(z.unknown()).min(1, 'has to hold one record at least').max(SYNC_ENTRIES),
});

export type TabletFileBody = z.infer<typeof tabletFileBody>;

/** The verdict on one entry of a file, as people read of it. */
export const fileVerdict = z.strictObject({
  ...verdictSchema.shape,
  /** What the entry says. */
  words: z.string(),
  job: z.string().optional(),
  by: z.string().optional(),
  at: z.string().optional(),
});

export type FileVerdict = z.infer<typeof fileVerdict>;

export const tabletFileAnswer = z.strictObject({ tablet: z.string(), verdicts: z.array(fileVerdict) });

/** Takes in what a tablet saved as a file; the same file again does no harm. */
export async function bringInFile(
  app: App,
  actor: Actor,
  body: TabletFileBody,
): Promise<z.input<typeof tabletFileAnswer>> {
  requireRole(actor, 'supervisor', 'owner');
  const device = await findDevice(app.db, body.tablet);
  if (device === undefined) throw notFound('The tablet that this file is of');
  const { verdicts, items } = await judgePush(app, {
    device,
    entries: inOrder(body.entries),
    clockOffsetMs: body.clockOffsetMs,
    begin: (trx) => lockDevice(trx, device.id),
    onKept: async ({ trx }, kept) => {
      const data = { tablet: device.id, name: device.name, savedAt: body.savedAt, ...kept };
      await appendWorkshopEntry(trx, actor, { kind: 'tablet-file-brought', data }, app);
    },
    atEnd: () => Promise.resolve(),
  });
  const told = await Promise.all(items.map((item, i) => inWords(app, item, verdicts[i])));
  return { tablet: device.name, verdicts: told };
}

/** A tablet's entries in the order in which it made them; what has no number is last. */
function inOrder(entries: readonly unknown[]): unknown[] {
  return [...entries].sort((one, other) => numberOf(one) - numberOf(other));
}

const numbered = z.looseObject({ entry: z.looseObject({ deviceSeq: z.int() }) });

function numberOf(entry: unknown): number {
  const read = numbered.safeParse(entry);
  return read.success ? read.data.entry.deviceSeq : Number.MAX_SAFE_INTEGER;
}

async function inWords(app: App, item: ReadItem, verdict: EntryVerdict | undefined): Promise<FileVerdict> {
  if (verdict === undefined) throw new RangeError('Every entry of a push has a verdict.');
  if (!item.read.ok) return { ...verdict, words: 'A record that could not be read' };
  const { entry } = item.read;
  const fold = await findFold(app.db, entry.job);
  const words = fold === undefined ? `A record of the kind “${entry.kind}”` : wordsOf(entry, fold.state.plan);
  const job = fold?.state.number;
  return {
    ...verdict,
    ...{ words, by: entry.author.name, at: entry.at },
    ...(job === null || job === undefined ? {} : { job }),
  };
}
