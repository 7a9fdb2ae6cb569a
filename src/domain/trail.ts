import { bytesOf } from '@/domain/canonical';
import {
  type ChainedEntry,
  isMadeByServer,
  verifyChain,
  verifyCounts,
  verifyWorkshopEntries,
} from '@/domain/trail-chain';
import {
  BrokenTrailError,
  bodyTextOf,
  openExport,
  requireBytes,
  requireExport,
  requireWhole,
  type TrailBody,
} from '@/domain/trail-export';
import { authorKeyId, authorMessage, headMessage } from './trail-hash';
import type { TrailChecks } from './trail-checks';
import { verifyIdentity, verifyPhotographs } from './trail-erasures';
import { compareKey, verifyWorkshopKeys, type WorkshopKeys } from './trail-keys';

export {
  authorKeyId,
  authorMessage,
  chainHash,
  contentHash,
  contentOf,
  exportMessage,
  headMessage,
  identityCommitment,
  keyMessage,
} from './trail-hash';

/*
 * What always holds of a trail: each entry's hash covers the hash before it, every entry that a person made is
 * signed by that person's key for that tablet, and one export has one text. Hashing and checking of signatures
 * are passed in, so that the same check runs in a browser, on the server and on the command line.
 */

/** The outcome of a verification. */
export type TrailVerdict =
  | {
      ok: true;
      entries: number;
      signatures: number;
      heads: number;
      /** The fingerprint of the workshop's key that signed the export. */
      key: string;
      /** Photographs that should lie beside the file, by their hash. */
      photographs: string[];
      keyCompared: boolean;
      headCompared: boolean;
      notes: string[];
      /** What was verified, so that nobody shows or replays another reading of the file. */
      body: TrailBody;
    }
  | { ok: false; brokenAt: string; why: string }
  | { ok: false; notATrail: true; why: string };

/**
 * Verifies an exported trail, its text or better its bytes: that not a byte differs from the form it was signed
 * in, that nothing is missing between its entries, and that who and which plan it names is proved by it.
 */
export async function verifyTrail(file: string | Uint8Array, checks: TrailChecks): Promise<TrailVerdict> {
  requireHex(checks.key, 'key fingerprint');
  requireHex(checks.head, 'head');
  const opened = openExport(file);
  if ('why' in opened) {
    return opened.isTrail ? broken('the file', opened.why) : { ok: false, notATrail: true, why: opened.why };
  }
  try {
    return await verifyOpened(opened, checks);
  } catch (error) {
    if (error instanceof BrokenTrailError) return broken(error.brokenAt, error.why);
    throw error;
  }
}

function broken(brokenAt: string, why: string): TrailVerdict {
  return { ok: false, brokenAt, why };
}

async function verifyOpened(
  opened: { text: string; parsed: unknown },
  checks: TrailChecks,
): Promise<TrailVerdict> {
  const whole = requireExport(opened);
  const { body } = whole;
  const workshopKey = requireBytes(whole.publicKey, 32, "the workshop's key");
  const key = checks.sha256(workshopKey);
  const workshopKeys = await verifyWorkshopKeys(whole, checks);
  // An edit breaks the signature over the whole too; looking inside first says where the edit was made.
  const isSigned = await checks.verifyEd25519(
    workshopKey,
    bytesOf(checks.sha256(bytesOf(bodyTextOf(opened.text, whole)))),
    requireBytes(whole.signature, 64, "the export's signature"),
  );
  const chained = verifyChain(body, checks.sha256);
  const notes = verifyCounts(body);
  verifyWorkshopEntries(body, checks.sha256);
  const signatures = await verifyAuthors(chained, body.keys, checks);
  await verifyHeads(body, workshopKeys, checks);
  notes.push(...verifyIdentity(body, checks), ...verifyPhotographs(body));
  requireWhole(isSigned, "the export's signature", 'It does not belong to this text and key.');
  notes.push(...compareKey(workshopKeys, key, checks.key), ...compareHead(body, checks.head));
  const { length: entries } = body.entries;
  const compared = { keyCompared: checks.key !== undefined, headCompared: checks.head !== undefined };
  const photographs = body.photographs.flatMap(({ hash, state }) => (state === 'kept' ? [hash] : []));
  const counts = { entries, signatures, heads: body.heads.length, photographs };
  return { ok: true, ...counts, key, ...compared, notes, body };
}

/** Every entry but the server's own is signed by its author's key for its tablet; gives how many were. */
async function verifyAuthors(
  entries: ChainedEntry[],
  keys: TrailBody['keys'],
  { sha256, verifyP256 }: TrailChecks,
): Promise<number> {
  const known = new Map<string, { owner: TrailBody['keys'][number]; point: Uint8Array<ArrayBuffer> }>();
  for (const owner of keys) {
    const at = `key ${owner.id}`;
    const point = requireBytes(owner.publicKey, 65, at);
    requireWhole(!known.has(owner.id), at, 'It is there twice.');
    requireWhole(authorKeyId(point, sha256) === owner.id, at, 'Its name is not that of its content.');
    known.set(owner.id, { owner, point });
  }
  // Signatures are checked side by side: they are most of the work, and a checker may use several threads.
  const proofs: { at: string; holds: Promise<boolean> }[] = [];
  for (const { recorded, signature, key: id, content } of entries) {
    const at = `entry ${recorded.seq}`;
    if (isMadeByServer(recorded)) {
      requireWhole(signature === null && id === null, at, 'The server made it, and yet it is signed.');
      continue;
    }
    requireWhole(signature !== null && id !== null, at, "It carries no author's signature.");
    const key = known.get(id);
    requireWhole(key !== undefined, at, 'The key that it is signed with is not in the file.');
    const isAuthors = key.owner.person === recorded.by && key.owner.device === recorded.device;
    requireWhole(isAuthors, at, 'The key that it is signed with belongs to another person or tablet.');
    const bytes = requireBytes(signature, 64, at);
    proofs.push({ at, holds: Promise.resolve(verifyP256(key.point, authorMessage(content), bytes)) });
  }
  const held = await Promise.all(proofs.map(({ holds }) => holds));
  const broken = proofs.find((_, index) => held[index] !== true);
  requireWhole(broken === undefined, broken?.at ?? '', "Its author's signature does not hold.");
  return proofs.length;
}

/** Each signed head names an entry that is there with that hash, and is signed by a key of the workshop. */
async function verifyHeads(
  { heads, entries, workshop, job }: TrailBody,
  keys: WorkshopKeys,
  { verifyEd25519 }: TrailChecks,
): Promise<void> {
  for (const head of heads) {
    const isWorkshops = head.trail === 'workshop';
    const at = `the ${isWorkshops ? "workshop's " : ''}head at entry ${head.seq}`;
    requireWhole(isWorkshops || head.trail === job.id, at, 'It belongs to another job.');
    // Of the workshop's trail the file holds only what the job names, so the entry may be absent.
    const hash = isWorkshops
      ? (workshop.find(({ recorded }) => recorded.seq === head.seq)?.hash ?? head.hash)
      : entries[head.seq - 1]?.hash;
    requireWhole(hash === head.hash, at, 'The trail has another entry in this place, or none.');
    const key = keys.get(head.key);
    requireWhole(key !== undefined, at, 'It is signed with a key that is not in the file.');
    const holds = await verifyEd25519(key, headMessage(head), requireBytes(head.signature, 64, at));
    requireWhole(holds, at, 'Its signature does not hold.');
  }
}

/** Compares with the head that the reader has from elsewhere; says where there was none. */
function compareHead({ entries }: TrailBody, head: string | undefined): string[] {
  if (head === undefined) return ['Head not compared.'];
  const at = entries.findIndex(({ hash }) => hash === head);
  const cut = 'The trail has no such entry: it was cut short or rewritten.';
  requireWhole(at !== -1, 'the head that you hold', cut);
  const later = entries.length - 1 - at;
  return later === 0 ? [] : [`${later} more came after the head that you hold.`];
}

function requireHex(text: string | undefined, name: string): void {
  if (text !== undefined && !/^[0-9a-f]{64}$/.test(text)) {
    throw new RangeError(`The ${name} to compare with must be 64 characters 0 to 9 and a to f.`);
  }
}
