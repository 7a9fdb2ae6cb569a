import { parseEntry, type Entry, type EntryData } from '@/domain/entry';
import { signContent } from './author-key';
import { readDevice } from './device';
import { contentHashOf } from './hashing';
import type { Refusal } from './record';
import { instantOf, type Surroundings } from './surroundings';
import { canMakeEntries } from './tablet';
import { cleanText } from './text';

export interface SignedOpening {
  ok: true;
  entry: Entry;
  signature: string;
  key: string;
}

/**
 * The first entry of a new job, signed in this browser, for `POST /api/jobs`. Keep it and send the very same
 * again if the reply was lost: it has its id and its number.
 */
export async function signOpening(
  s: Surroundings,
  { plan, data, by, job = s.newId() }: { plan: string; data: EntryData<'opened'>; by: string; job?: string },
): Promise<SignedOpening | Omit<Refusal, 'index'>> {
  const allowed = await canMakeEntries(s, by);
  if (!allowed.ok) return allowed;
  const [device, workshop, key] = await Promise.all([
    readDevice(s),
    s.db.workshop.get('workshop'),
    s.db.authorKeys.get(by),
  ]);
  const person = workshop?.people.find(({ id }) => id === by);
  if (!workshop || !key || !person) {
    return {
      ok: false,
      code: 'no-workshop',
      why: 'This browser does not have the workshop’s people and tools yet.',
      unlock: 'Connect to the network and load the page again.',
    };
  }
  const parsed = parseEntry(
    cleanText({
      ...{ v: 1, id: s.newId(), job, plan, basis: 0, workshop: workshop.seq, kind: 'opened' },
      ...{ by, author: { name: person.name, roles: person.roles }, with: [] },
      ...{ device: device.id, deviceSeq: 1, at: instantOf(s.now()), data },
    }),
  );
  if (!parsed.ok) {
    const why = parsed.newer ? 'unknown form' : `${parsed.field.replace(/^data\./, '')}: ${parsed.why}`;
    return { ok: false, code: 'malformed', why: `The job can’t be opened like this: ${why}.` };
  }
  await s.db.counters.put({ job, deviceSeq: 1, place: 0 });
  const signature = await signContent(s.subtle, key, contentHashOf(parsed.entry));
  return { ok: true, entry: parsed.entry, signature, key: key.id };
}
