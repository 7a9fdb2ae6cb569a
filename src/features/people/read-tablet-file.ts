import * as z from 'zod/mini';
import { fromBase64url } from '@/domain/base64url';

/*
 * A tablet's file as it is brought in: read here, and sent in parts that are no larger than a tablet's own push.
 */

const tabletFile = z.object({
  v: z.literal(1),
  format: z.literal('witnessmark-tablet'),
  tablet: z.string(),
  name: z.optional(z.string()),
  savedAt: z.string(),
  clockOffsetMs: z.int(),
  entries: z.array(z.unknown()),
  photographs: z.array(
    z.object({
      hash: z.string().check(z.regex(/^[0-9a-f]{64}$/)),
      type: z.enum(['image/jpeg', 'image/png', 'image/webp']),
      bytes: z.string(),
    }),
  ),
});

export type TabletFile = z.infer<typeof tabletFile>;

type ReadFile = { ok: true; file: TabletFile } | { ok: false; why: string };

/** Reads what was saved on a tablet, or says what is wrong with the file and where. */
export function readTabletFile(text: string): ReadFile {
  let json: unknown;
  try {
    json = JSON.parse(text);
  } catch {
    // Why it is no JSON says nothing to whoever picked the file.
    return { ok: false, why: 'This file can’t be read: it is no tablet’s file, or it was cut short.' };
  }
  if (
    typeof json !== 'object' ||
    json === null ||
    !('format' in json) ||
    json.format !== 'witnessmark-tablet'
  )
    return { ok: false, why: 'This is not a tablet’s file: “format” does not say so.' };
  if (!('v' in json) || json.v !== 1)
    return {
      ok: false,
      why: 'This file was saved by a newer program: “v” is not 1. Update the server first.',
    };
  const read = z.safeParse(tabletFile, json);
  if (read.success) return { ok: true, file: read.data };
  const field = read.error.issues[0]?.path.map(String).join('.') ?? 'file';
  return { ok: false, why: `This file is damaged: “${field}” is not what it has to be.` };
}

const PART_ENTRIES = 200;
/** The server reads 512 kB; what stands around the entries needs some of it. */
const PART_BYTES = 480 * 1024;

/** The bodies in which the file's records are sent, in order. */
export function partsOf({ v, format, tablet, savedAt, clockOffsetMs, entries }: TabletFile) {
  const parts: unknown[][] = [];
  let bytes = 0;
  for (const entry of entries) {
    const size = new TextEncoder().encode(JSON.stringify(entry)).length + 1;
    const last = parts.at(-1);
    if (last === undefined || last.length === PART_ENTRIES || bytes + size > PART_BYTES) {
      parts.push([entry]);
      bytes = size;
    } else {
      last.push(entry);
      bytes += size;
    }
  }
  return parts.map((part) => ({ v, format, tablet, savedAt, clockOffsetMs, entries: part }));
}

/** A photograph's bytes; undefined where they were damaged. */
export function bytesOf({ bytes }: TabletFile['photographs'][number]): ArrayBuffer | undefined {
  try {
    return fromBase64url(bytes).buffer;
  } catch (error) {
    if (error instanceof RangeError) return undefined;
    throw error;
  }
}
