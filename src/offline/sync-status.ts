import type { FloorDatabase, Whereabouts } from './database';
import type { Device } from './device';
import { lostKeysIn } from './lost-keys';
import type { Surroundings } from './surroundings';

/** What this tablet has still to send, and how sending goes. */
export interface SyncStatus {
  /** Records that are only here. */
  onTablet: number;
  /** Records that the server has seen and can't judge yet. */
  waiting: number;
  /** Records made here that the server has on its disk. */
  sent: number;
  refused: number;
  /** Photographs that are only here. */
  photos: number;
  /** Whose key a restored server has forgotten, by name. */
  signInAgain: string[];
  running: boolean;
  /** RFC 3339; when everything last went through. */
  lastSyncAt?: string | undefined;
  lastTriedAt?: string | undefined;
  nextTryAt?: string | undefined;
  trouble?: { code: string; words: string } | undefined;
  /** The tablet's clock minus the server's when they last met. */
  clockOffsetMs?: number | undefined;
  /** All of this in one short line. */
  words: string;
}

/** How the last run of any tab went, as it is kept. */
export interface LastSync {
  syncedAt?: string | undefined;
  triedAt: string;
  trouble?: { code: string; words: string } | undefined;
}

/** Counts what is on the disk; meant for a live query, so it asks as little as it can. */
export async function readSyncStatus({ db }: Surroundings): Promise<Omit<SyncStatus, 'running' | 'words'>> {
  const tables = [db.meta, db.outbox, db.entries, db.refused, db.photos, db.workshop];
  return db.transaction('r', tables, async () => {
    const meta = new Map((await db.meta.toArray()).map(({ key, value }) => [key, value]));
    const device = meta.get('device') as Device | undefined;
    const last = meta.get('sync') as LastSync | undefined;
    const count = (where: Whereabouts) => db.outbox.where('where').equals(where).count();
    const confirmed = device ? await db.entries.where('device').equals(device.id).count() : 0;
    return {
      onTablet: await count('on this tablet'),
      waiting: await count('waiting'),
      sent: (await count('sent')) + confirmed,
      refused: await db.refused.count(),
      photos: await db.photos.where('sent').equals(0).count(),
      signInAgain: await namesOf(db, lostKeysIn(meta.get('lostKeys'))),
      lastSyncAt: last?.syncedAt,
      lastTriedAt: last?.triedAt,
      trouble: last?.trouble,
      clockOffsetMs: meta.get('clock') as number | undefined,
    };
  });
}

/** The names of people who may have been forgotten by the workshop. */
async function namesOf(db: FloorDatabase, people: readonly string[]): Promise<string[]> {
  if (people.length === 0) return [];
  const known = (await db.workshop.get('workshop'))?.people ?? [];
  const names = new Map(known.map(({ id, name }) => [id, name]));
  return people.map((person) => names.get(person) ?? 'Somebody who was added after the backup').sort();
}

/** Where the records are, such as "12 on this tablet, 1 refused". */
export function statusWords(status: Omit<SyncStatus, 'words'>): string {
  const parts = [
    [status.onTablet, 'on this tablet'],
    [status.waiting, 'waiting'],
    [status.refused, 'refused'],
    [status.photos, status.photos === 1 ? 'photograph on this tablet' : 'photographs on this tablet'],
  ] as const;
  const told = parts.filter(([count]) => count > 0).map(([count, words]) => `${count} ${words}`);
  return told.length > 0 ? told.join(', ') : 'All sent';
}

/** What is to be done after the server was restored to before somebody's key was enrolled; undefined if nothing is. */
export function signInAgainWords(names: readonly string[]): string | undefined {
  if (names.length === 0) return undefined;
  const who = names.length === 1 ? names[0] : `${names.slice(0, -1).join(', ')} and ${names.at(-1)}`;
  return `${who} ${names.length === 1 ? 'has' : 'have'} to sign in on this tablet again: the server was restored from a backup that is older than the key here. Nothing is lost: the records are kept on this tablet, and go in by themselves once that is done.`;
}

const CLOCK_TOLERANCE_MS = 5 * 60 * 1000;

/** What to tell about a clock that is more than five minutes off; records are kept all the same. */
export function clockWords(offsetMs: number | undefined): string | undefined {
  if (offsetMs === undefined || Math.abs(offsetMs) <= CLOCK_TOLERANCE_MS) return undefined;
  const minutes = Math.round(Math.abs(offsetMs) / 60_000);
  const how = offsetMs > 0 ? 'fast' : 'slow';
  return `The clock of this tablet is ${minutes} minutes ${how}. Records are kept and flagged: set the clock.`;
}

/** Where one record is; a record that is nowhere here was never made on this tablet. */
export async function whereIsRecord({ db }: Surroundings, id: string): Promise<Whereabouts | undefined> {
  const waiting = await db.outbox.where('id').equals(id).first();
  if (waiting) return waiting.where;
  if (await db.refused.get(id)) return 'refused';
  return (await db.entries.where('id').equals(id).count()) > 0 ? 'sent' : undefined;
}
