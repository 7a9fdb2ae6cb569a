import type { Entry, EntryOf } from '@/domain/entry';
import type { Workshop } from '@/domain/job-state';
import { isSignedBy } from './author-signature';
import type { Batch } from './sync-batch';
import type { KeyRow } from './sync-known';
import type { ReadItem } from './sync-read';

type Proof = { ok: true; signature: string; key: KeyRow } | { ok: false; code: string; reason: string };

/** Authorship is proved by the person's key for that tablet; no session is needed, and none would do. */
export function proveAuthor(batch: Batch, item: ReadItem, entry: Entry): Proof {
  const { carried } = item;
  const key = carried === undefined ? undefined : batch.keys.get(carried.key);
  if (carried === undefined || key === undefined) {
    return {
      ok: false,
      code: 'key-unknown',
      reason: 'It is signed with a key that the workshop does not know.',
    };
  }
  if (key.device !== entry.device || key.person !== entry.by) {
    return {
      ok: false,
      code: 'key-foreign',
      reason: 'It is signed with the key of another person or another tablet.',
    };
  }
  const isSigned =
    batch.proofs.get(item.index) ?? isSignedBy(key.publicKey, item.contentHash, carried.signature);
  if (!isSigned) {
    return {
      ok: false,
      code: 'signature-wrong',
      reason: "The author's signature does not fit what is written.",
    };
  }
  return { ok: true, signature: carried.signature, key };
}

/** Entries made before a key was revoked are still taken, however late they come. */
export function isRevoked(batch: Batch, key: KeyRow, workshopSeq: number): boolean {
  return key.revokedAt !== null && workshopSeq >= batch.history.seqAt(key.revokedAt);
}

/** An entry carries the printed name, the roles and the tool's plate as used; they must be the workshop's. */
export function isTrueToWorkshop(entry: Entry, workshop: Workshop): boolean {
  const person = workshop.people.find(({ id }) => id === entry.by);
  if (person === undefined) return true;
  const { name, roles } = entry.author;
  if (person.name !== name || !isSameSet(person.roles, roles)) return false;
  if (entry.kind === 'signed' && !isTrueSignature(entry, person)) return false;
  const used = 'tool' in entry.data ? entry.data.tool : undefined;
  if (used === undefined) return true;
  const tool = workshop.tools.find(({ id }) => id === used.id);
  return tool === undefined || (tool.serial === used.serial && tool.dueOn === used.dueOn);
}

/** A signature may leave out the certificate, as older tablets do, and names no other than the workshop has. */
function isTrueSignature({ data, author }: EntryOf<'signed'>, person: Workshop['people'][number]): boolean {
  if (data.name !== author.name || !isSameSet(data.roles, author.roles)) return false;
  const { certificate } = data;
  if (certificate === undefined) return true;
  return certificate.number === person.certificate?.number && certificate.kind === person.certificate.kind;
}

function isSameSet(some: readonly string[], others: readonly string[]): boolean {
  return some.length === others.length && some.every((one) => others.includes(one));
}
