import type { TrailChecks } from './trail-checks';
import { isMadeByServer } from './trail-chain';
import { requireWhole, type TrailBody } from './trail-export';
import { identityCommitment } from './trail-hash';

/*
 * What may be missing from a trail without its being broken: a field or a photograph that an erasure took, and
 * the erasure is an entry of the trail; a field that its reader may not see; a photograph that never came.
 */

/** Who and which vehicle: each value is the one that the job was opened with, was erased, or is withheld. */
export function verifyIdentity(
  { entries, identity }: TrailBody,
  { hmacSha256 }: Pick<TrailChecks, 'hmacSha256'>,
): string[] {
  const opened = entries.find(({ recorded }) => recorded.kind === 'opened')?.recorded.data.commitments;
  const commitments = typeof opened === 'object' && opened !== null ? Object.entries(opened) : [];
  const erased = erasedIn(entries, 'fields');
  const values = new Map(Object.entries(identity));
  const notes: string[] = [];
  for (const [field, commitment] of commitments) {
    const [at, value] = [`identity: ${field}`, values.get(field)];
    requireWhole(value !== undefined, at, 'It is neither in the file nor erased or withheld.');
    values.delete(field);
    if (value === 'erased') {
      requireWhole(erased.has(field), at, 'It is missing, and no entry says that it was erased.');
      notes.push(`${field}: erased.`);
    } else if (value === 'withheld') notes.push(`${field}: withheld.`);
    else {
      const isCommitted = identityCommitment(value, hmacSha256) === commitment;
      requireWhole(isCommitted, at, 'It is not the value that the job was opened with.');
    }
  }
  for (const field of values.keys())
    requireWhole(false, `identity: ${field}`, 'The trail knows nothing of it.');
  return notes;
}

/** The list of photographs is that of the entries; what was erased is told of by an entry. */
export function verifyPhotographs({ entries, photographs }: TrailBody): string[] {
  const erased = erasedIn(entries, 'photographs');
  const named = new Map<unknown, unknown>();
  for (const { recorded } of entries)
    if (recorded.kind === 'photographed') named.set(recorded.data.photo, recorded.data.bytes);
  const notes: string[] = [];
  for (const { hash, bytes, state } of photographs) {
    const at = `photograph ${hash}`;
    requireWhole(named.get(hash) === bytes, at, 'No entry names it so.');
    named.delete(hash);
    if (state === 'missing') notes.push(`Photograph ${hash} is missing.`);
    if (state !== 'erased') continue;
    requireWhole(erased.has(hash), at, 'It is missing, and no entry says that it was erased.');
    notes.push(`Photograph ${hash}: erased.`);
  }
  for (const hash of named.keys())
    requireWhole(false, `photograph ${String(hash)}`, 'An entry names it, and the list does not.');
  return notes;
}

function erasedIn(entries: TrailBody['entries'], what: 'fields' | 'photographs'): ReadonlySet<unknown> {
  const lists = entries.flatMap(({ recorded }) => {
    const list = recorded.kind === 'erased' && isMadeByServer(recorded) ? recorded.data[what] : undefined;
    return Array.isArray(list) ? (list as unknown[]) : [];
  });
  return new Set(lists);
}
