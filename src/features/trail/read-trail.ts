import { sha256 } from '@noble/hashes/sha2.js';
import { bytesToHex } from '@noble/hashes/utils.js';
import { hashJson } from '@/domain/canonical';
import type { Recorded } from '@/domain/entry';
import type { Plan } from '@/domain/plan';
import type { SignedHead, TrailExport } from '@/domain/trail-export';

/** A trail as the page shows it. */
export interface ReadTrail {
  number: string;
  plans: Map<string, Plan>;
  entries: { recorded: Recorded; hash: string }[];
  heads: SignedHead[];
  /** The bytes as the server signed them, for verification. */
  bytes: Uint8Array<ArrayBuffer>;
}

/** Why a trail can't be shown, in words for the reader. */
export class TrailUnreadError extends Error {
  override name = 'TrailUnreadError';
}

/** Fetches the signed trail of a job. */
export async function fetchTrail(job: string): Promise<ReadTrail> {
  let response: Response;
  try {
    response = await fetch(`/api/jobs/${job}/trail`, { headers: { accept: 'application/json' } });
  } catch {
    // fetch throws for every failure of the network.
    throw new TrailUnreadError('The server was not reached.');
  }
  if (!response.ok) throw new TrailUnreadError(await wordsOfRefusal(response));
  const bytes = new Uint8Array(await response.arrayBuffer());
  return readTrail(bytes);
}

async function wordsOfRefusal(response: Response): Promise<string> {
  const fallback = `The server answered ${response.status}.`;
  const isJson = response.headers.get('content-type')?.startsWith('application/json') === true;
  if (!isJson) return fallback;
  const answer = (await response.json()) as { error?: { message?: string } };
  return answer.error?.message ?? fallback;
}

/** Reads the bytes for showing; whether they hold is verifyTrail's to say. */
export function readTrail(bytes: Uint8Array<ArrayBuffer>): ReadTrail {
  const { body } = JSON.parse(new TextDecoder().decode(bytes)) as TrailExport;
  const plans = new Map(
    (body.plans as unknown as Plan[]).map((plan) => [hashJson(plan, (b) => bytesToHex(sha256(b))), plan]),
  );
  return {
    number: body.job.number,
    plans,
    // An entry of a newer form than this page knows is shown by its kind alone; see trail-lines.ts.
    entries: body.entries.map(({ recorded, hash }) => ({ recorded: recorded as unknown as Recorded, hash })),
    heads: body.heads.filter(({ trail }) => trail === body.job.id),
    bytes,
  };
}
