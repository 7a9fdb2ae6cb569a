/* Opening a job from a desk: the plan is prepared, the first entry signed here, and the same sent until answered. */
import { hmac } from '@noble/hashes/hmac.js';
import { sha256 } from '@noble/hashes/sha2.js';
import { bytesToHex } from '@noble/hashes/utils.js';
import * as z from 'zod/mini';
import { identityCommitment } from '@/domain/trail-hash';
import { offlineOfThisPage, type Offline } from '@/offline/offline';
import { signOpening, type SignedOpening } from '@/offline/opening';
import type { PreparedPhoto } from '@/offline/photo';
import { makeAvailableOffline, pullJobList, pullWorkshop } from '@/offline/prefetch';
import { recordEntries } from '@/offline/record';
import { callServer } from '@/offline/server-call';
import { whoIsWorking } from '@/offline/tablet';

/** What the form asks. */
export interface NewJobFields {
  route: string;
  options: Record<string, string>;
  registration: string;
  vin: string;
  odometer: string;
  odometerUnit: 'km' | 'mi';
  customerName: string;
  customerEmail: string;
  customerPhone: string;
  approver: string;
  complaint: string;
  oldParts: string;
  promisedOn: string;
  note: string;
  people: string[];
}

/** A photograph of the arrival, ready to be kept. */
export interface ArrivalPhoto extends PreparedPhoto {
  subject: string;
}

export type OpenOutcome =
  | { ok: true; id: string; /** The job is open, and this did not come about. */ trouble?: string }
  | { ok: false; why: string; field?: string };

const IDENTITY = [
  'registration',
  'vin',
  'customerName',
  'customerEmail',
  'customerPhone',
  'approver',
  'complaint',
] as const;

type Identity = Partial<Record<(typeof IDENTITY)[number], { value: string; salt: string }>>;

/** An opening that was signed; it is sent again, the very same, when its answer was lost. */
export interface PendingOpening {
  asked: string;
  opening: SignedOpening;
  identity: Identity;
}

const prepared = z.object({
  number: z.string(),
  plan: z.string(),
  planBody: z.object({ engine: z.object({ name: z.string() }) }),
});
const opened = z.object({ id: z.string(), number: z.string() });

/** Opens the job. `pending` is what `keep` was last given: the same form sent again sends the same entry again. */
export async function openNewJob(
  actor: string,
  fields: NewJobFields,
  photos: ArrivalPhoto[],
  pending: PendingOpening | undefined,
  keep: (pending: PendingOpening) => void,
): Promise<OpenOutcome> {
  const offline = offlineOfThisPage();
  const asked = JSON.stringify(fields);
  const ready = pending?.asked === asked ? pending : await signAnew(offline, actor, fields, asked);
  if ('why' in ready) return { ok: false, why: ready.why };
  keep(ready);
  const { opening, identity } = ready;
  const body = {
    entry: opening.entry,
    signature: opening.signature,
    key: opening.key,
    identity,
    people: fields.people,
  };
  const answer = await callServer(offline, { method: 'POST', path: '/api/jobs', body, answer: opened });
  if (!answer.ok) return { ok: false, why: answer.why };
  const trouble = await keepArrivalPhotos(offline, answer.body.id, actor, photos);
  return { ok: true, id: answer.body.id, ...(trouble === undefined ? {} : { trouble }) };
}

async function signAnew(
  offline: Offline,
  actor: string,
  fields: NewJobFields,
  asked: string,
): Promise<PendingOpening | { why: string }> {
  const workshop = await pullWorkshop(offline);
  if (!workshop.ok) return workshop;
  const plan = await callServer(offline, {
    method: 'POST',
    path: '/api/jobs/prepare',
    body: { route: fields.route, options: fields.options },
    answer: prepared,
  });
  if (!plan.ok) return plan;
  const identity = identityOf(fields);
  const commitments = Object.fromEntries(
    Object.entries(identity).map(([field, salted]) => [field, identityCommitment(salted, hmacSha256)]),
  );
  const opening = await signOpening(offline, {
    by: actor,
    plan: plan.body.plan,
    data: {
      number: plan.body.number,
      engine: plan.body.planBody.engine.name,
      options: fields.options,
      odometer: { value: fields.odometer.replace(',', '.'), unit: fields.odometerUnit },
      commitments,
      oldParts: fields.oldParts,
      ...(fields.promisedOn === '' ? {} : { promisedOn: fields.promisedOn }),
      ...(fields.note.trim() === '' ? {} : { note: fields.note.trim() }),
    },
  });
  return opening.ok ? { asked, opening, identity } : opening;
}

function hmacSha256(key: Uint8Array, message: Uint8Array): string {
  return bytesToHex(hmac(sha256, key, message));
}

/** Each value under a salt of its own, so that one can be erased without giving away another. */
function identityOf(fields: NewJobFields): Identity {
  const identity: Identity = {};
  for (const field of IDENTITY) {
    const value = fields[field].trim().normalize('NFC');
    const salt = bytesToHex(crypto.getRandomValues(new Uint8Array(16)));
    if (value !== '') identity[field] = { value: field === 'vin' ? value.toUpperCase() : value, salt };
  }
  return identity;
}

/** The pictures go the way of every photograph: an entry each, durable here, then sent. */
async function keepArrivalPhotos(
  offline: Offline,
  job: string,
  actor: string,
  photos: ArrivalPhoto[],
): Promise<string | undefined> {
  if (photos.length === 0) return undefined;
  const listed = await pullJobList(offline);
  if (!listed.ok) return listed.why;
  const here = await makeAvailableOffline(offline, job);
  if (!here.ok) return here.why;
  const drafts = photos.map(({ hash, bytes, type, subject }) => ({
    kind: 'photographed' as const,
    data: { photo: hash, bytes: bytes.byteLength, type, from: 'from file' as const, subject },
  }));
  const kept = await recordEntries(offline, job, drafts, { by: actor, photos });
  if (!kept.ok) return kept.why;
  await offline.sync.now();
  return undefined;
}

/** Is this browser ready to sign for the person? Their own key is on it after a sign-in here. */
export async function isReadyFor(actor: string): Promise<boolean> {
  const offline = offlineOfThisPage();
  if ((await whoIsWorking(offline)) === null) return false;
  return (await offline.db.authorKeys.get(actor)) !== undefined;
}
