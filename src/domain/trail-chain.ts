import { bytesOf, canonicalWithout, hashJson, type Sha256 } from '@/domain/canonical';
import { officeKinds } from '@/domain/entry';
import { requireWhole, type TrailBody } from '@/domain/trail-export';
import { NO_PREVIOUS, SERVER_FIELDS } from '@/domain/trail-hash';

const ADDED: ReadonlySet<string> = new Set(SERVER_FIELDS);

/** An entry whose place in the chain holds, with the content hash that its author signed. */
export type ChainedEntry = TrailBody['entries'][number] & { content: string };

/** Order, links, ids and plans of the job's entries. */
export function verifyChain({ entries, job, plans }: TrailBody, sha256: Sha256): ChainedEntry[] {
  requireWhole(entries.length > 0, 'the file', 'It has no entries.');
  const knownPlans = new Set(plans.map((plan) => hashJson(plan, sha256)));
  const ids = new Set<string>();
  let prev = NO_PREVIOUS;
  return entries.map((entry, index) => {
    const { recorded, hash } = entry;
    const at = `entry ${index + 1}`;
    const { seq } = recorded;
    requireWhole(seq === index + 1, at, `Number ${seq} is here: an entry is missing, moved or put in.`);
    requireWhole(recorded.job === job.id, at, 'It belongs to another job.');
    requireWhole(recorded.prev === prev, at, 'It does not follow the entry before it.');
    const [whole, content] = canonicalWithout(recorded, ADDED);
    const isHashed = sha256(bytesOf(whole)) === hash;
    requireWhole(isHashed, at, 'Its content is not what its hash was made of.');
    requireWhole(!ids.has(recorded.id), at, 'Its id was used before.');
    requireWhole(knownPlans.has(recorded.plan), at, 'The plan that it was made under is not in the file.');
    ids.add(recorded.id);
    prev = hash;
    return { ...entry, content: sha256(bytesOf(content)) };
  });
}

/** Each tablet counted upwards; a number that came again was recorded as a conflict, and gives a note. */
export function verifyCounts({ entries }: TrailBody): string[] {
  const reached = new Map<string, number>();
  const notes: string[] = [];
  for (const { recorded } of entries) {
    if (isMadeByServer(recorded)) continue;
    const { seq, device, deviceSeq, conflict } = recorded;
    const last = reached.get(device) ?? 0;
    if (deviceSeq <= last) {
      // What happened is recorded even if a restored or copied tablet repeats its numbers.
      requireWhole(conflict !== undefined, `entry ${seq}`, `Its tablet had already counted to ${last}.`);
      notes.push(`Entry ${seq} repeats number ${deviceSeq} of its tablet; it was recorded as a conflict.`);
    }
    reached.set(device, Math.max(last, deviceSeq));
  }
  return notes;
}

/** The workshop's entries that the job names: each is whole, neighbours are linked, all named ones are there. */
export function verifyWorkshopEntries({ workshop, entries, keys }: TrailBody, sha256: Sha256): void {
  const known = new Map<number, TrailBody['workshop'][number]>();
  for (const entry of workshop) {
    const { recorded, hash } = entry;
    const at = `workshop entry ${recorded.seq}`;
    requireWhole(!known.has(recorded.seq), at, 'It is there twice.');
    requireWhole(hashJson(recorded, sha256) === hash, at, 'Its content is not what its hash was made of.');
    known.set(recorded.seq, entry);
  }
  for (const { seq, prev } of workshop.map(({ recorded }) => recorded)) {
    const before = seq === 1 ? NO_PREVIOUS : known.get(seq - 1)?.hash;
    const follows = before === undefined || prev === before;
    requireWhole(follows, `workshop entry ${seq}`, 'It does not follow the entry before it.');
  }
  for (const { seq, workshop: named } of entries.map(({ recorded }) => recorded)) {
    // An entry made before the tablet knew anything of the workshop names 0.
    const why = `It names workshop entry ${named}, which is not in the file.`;
    requireWhole(named === 0 || known.has(named), `entry ${seq}`, why);
  }
  for (const key of keys) {
    const data = known.get(key.workshop)?.recorded.data ?? {};
    const enrolled = { publicKey: data.publicKey, person: data.person, device: data.tablet };
    const isEnrolled = ENROLMENT.every((field) => enrolled[field] === key[field]);
    const why = `Workshop entry ${key.workshop} did not enrol it for this person and tablet.`;
    requireWhole(isEnrolled, `key ${key.id}`, why);
  }
}

const ENROLMENT = ['publicKey', 'person', 'device'] as const;

/** Whether the server itself made an entry: only its own kinds, and only in the workshop's name. */
export function isMadeByServer({ kind, by }: { kind: string; by: string }): boolean {
  return by === 'workshop' && (officeKinds as readonly string[]).includes(kind);
}
