import { readdirSync, readFileSync, statSync } from 'node:fs';
import path from 'node:path';
import { parseArgs } from 'node:util';
import { type TrailVerdict, verifyTrail } from '@/domain/trail';
import { sha256Hex } from '@/server/crypto';
import { nodeChecks } from '@/server/trail-checks';

/*
 * npm run verify-trail -- FILE [--head HASH] [--key FINGERPRINT] [--photographs FOLDER]
 *
 * Says whether an exported trail is whole: exit 0 whole, 1 broken, 2 not a trail or not asked rightly.
 * A photograph that isn't there is said, and is no break; one whose bytes were changed is.
 */

const WHOLE = 0;
const BROKEN = 1;
const NOT_A_TRAIL = 2;

/** A job of a hundred thousand entries is well below this; a longer text is more than one string can hold. */
const LARGEST_BYTES = 400_000_000;

const USAGE = `Use it like this: npm run verify-trail -- FILE [--head HASH] [--key FINGERPRINT] [--photographs FOLDER]
  FILE   an exported trail, as it was given to you
  --head the hash of a signed head that you have from elsewhere, such as a printed Pack
  --key  the fingerprint of the workshop's key that you have from elsewhere
  --photographs  the folder with the job's photographs, each named by its hash`;

/** Verifies one file and prints what was found, in plain words; `cwd` is where relative paths begin. */
export async function main(args: string[], cwd: string): Promise<number> {
  const asked = readArguments(args);
  if ('why' in asked) return say(NOT_A_TRAIL, `${asked.why}\n${USAGE}`);
  let bytes: Uint8Array;
  try {
    bytes = readBounded(path.resolve(cwd, asked.file));
  } catch (error) {
    return say(NOT_A_TRAIL, `${asked.file} could not be read: ${wordsOf(error)}.`);
  }
  const { head, key } = asked;
  const verdict = await verifyTrail(bytes, { ...nodeChecks(), head, key });
  if (!verdict.ok || asked.photographs === undefined) return report(asked.file, verdict);
  const folder = path.resolve(cwd, asked.photographs);
  let found: PhotographsFound;
  try {
    found = comparePhotographs(folder, verdict.photographs);
  } catch (error) {
    return say(NOT_A_TRAIL, `${asked.photographs} could not be read: ${wordsOf(error)}.`);
  }
  const [changed] = found.changed;
  if (changed !== undefined) {
    const why = 'Its bytes are not those that were photographed.';
    return report(asked.file, { ok: false, brokenAt: `photograph ${changed}`, why });
  }
  const missing = found.missing.map((hash) => `Photograph ${hash} is not in the folder.`);
  const notes = [...verdict.notes, `${found.whole} photographs compared.`, ...missing];
  return report(asked.file, { ...verdict, notes });
}

interface PhotographsFound {
  whole: number;
  changed: string[];
  missing: string[];
}

/** Compares the bytes in a folder, each file named by a hash with or without an ending, with the hashes. */
function comparePhotographs(folder: string, hashes: readonly string[]): PhotographsFound {
  const files = new Map(readdirSync(folder).map((name) => [name.replace(/\.[a-z]+$/, ''), name]));
  const found: PhotographsFound = { whole: 0, changed: [], missing: [] };
  for (const hash of hashes) {
    const name = files.get(hash);
    if (name === undefined) found.missing.push(hash);
    else if (sha256Hex(readBounded(path.join(folder, name))) === hash) found.whole += 1;
    else found.changed.push(hash);
  }
  return found;
}

/** A device never ends, and a file this large is no trail: neither is read at all. */
function readBounded(file: string): Uint8Array {
  const found = statSync(file);
  if (found.isDirectory()) throw new Error('it is a folder');
  if (!found.isFile()) throw new Error('it is no file');
  if (found.size > LARGEST_BYTES) throw new Error('it is larger than any trail');
  return readFileSync(file);
}

type Asked =
  | {
      file: string;
      head: string | undefined;
      key: string | undefined;
      photographs: string | undefined;
    }
  | { why: string };

function readArguments(args: string[]): Asked {
  try {
    const { values, positionals } = parseArgs({
      args,
      options: { head: { type: 'string' }, key: { type: 'string' }, photographs: { type: 'string' } },
      allowPositionals: true,
    });
    const [file, ...more] = positionals;
    if (file === undefined || more.length > 0) return { why: 'One file is verified at a time.' };
    const { head, key, photographs } = values;
    for (const [name, value] of Object.entries({ head, key })) {
      if (value !== undefined && !/^[0-9a-f]{64}$/.test(value))
        return { why: `--${name} has to be 64 characters, 0 to 9 and a to f.` };
    }
    return { file, head, key, photographs };
  } catch (error) {
    if (error instanceof TypeError) return { why: error.message };
    throw error;
  }
}

function report(file: string, verdict: TrailVerdict): number {
  if (verdict.ok) {
    const { entries, signatures, heads, key, notes } = verdict;
    const counts = `${entries} entries, ${signatures} author signatures, ${heads} signed heads.`;
    return say(WHOLE, [`Whole: ${file}`, counts, `Signed by the workshop key ${key}.`, ...notes].join('\n'));
  }
  if ('notATrail' in verdict) return say(NOT_A_TRAIL, `Not a trail: ${file}\n${verdict.why}`);
  return say(BROKEN, `Broken: ${file}\nAt ${verdict.brokenAt}: ${verdict.why}`);
}

function say(code: number, words: string): number {
  if (code === WHOLE) console.log(words);
  else console.error(words);
  return code;
}

function wordsOf(error: unknown): string {
  const code = error instanceof Error && 'code' in error ? error.code : undefined;
  if (code === 'ENOENT') return 'there is no such file';
  if (code === 'EACCES') return 'this account may not read it';
  return error instanceof Error ? error.message : String(error);
}
