import type { Recorded } from '@/domain/entry';
import { exportMessage } from '@/domain/trail';
import { type SignedHead, TRAIL_FORMAT, type WorkshopKey } from '@/domain/trail-export';
import type { Actor } from './actor';
import { stamp } from './clock';
import type { App } from './compose';
import { canonicalJson, sha256Hex } from './crypto';
import type { Db } from './database';
import { getReadableJob } from './job-access';
import { readIdentity } from './job-identity';
import type { JobRow } from './job-rows';
import { signWithHeadKey } from './keys';
import { getPlan } from './plans';
import { listSignedHeads } from './signed-heads';
import { listTrailRows } from './sync-pull';
import { appendWorkshopEntry } from './workshop-trail';

/** A job's trail with all that proves it, in the form in which it is exported. */
export interface TrailBundle {
  v: 1;
  format: typeof TRAIL_FORMAT;
  exportedAt: string;
  job: { id: string; number: string };
  plans: unknown[];
  entries: { recorded: Recorded; hash: string; signature: string | null; key: string | null }[];
  keys: { id: string; person: string; device: string; publicKey: string; workshop: number }[];
  /** The workshop's entries that the job names, those that enrolled its keys, and those that tell of it. */
  workshop: { recorded: Record<string, unknown>; hash: string }[];
  heads: SignedHead[];
  workshopKeys: WorkshopKey[];
  identity: Record<string, { value: string; salt: string } | 'erased' | 'withheld'>;
  photographs: { hash: string; bytes: number; state: 'kept' | 'missing' | 'erased' }[];
}

/** The signed trail of a job for reading on a page: the form of an export, but nothing leaves the house. */
export async function readTrail(app: App, actor: Actor, id: string): Promise<string> {
  const job = await getReadableJob(app.db, actor, id);
  // One transaction, so that nothing comes in between the entries and what is read for them.
  const body = await app.db.transaction().execute((trx) => bundle(trx, actor, job, app));
  return signedText(app, body);
}

/** The export file of a job: exactly these bytes are signed, and the workshop's trail tells that they went out. */
export async function exportTrail(
  app: App,
  actor: Actor,
  id: string,
): Promise<{ text: string; number: string }> {
  const job = await getReadableJob(app.db, actor, id);
  return app.db.transaction().execute(async (trx) => {
    const body = await bundle(trx, actor, job, app);
    const data = { job: id, number: job.number, entries: body.entries.length };
    await appendWorkshopEntry(trx, actor, { kind: 'exported', data }, app);
    return { text: signedText(app, body), number: job.number };
  });
}

function signedText({ keys: { head } }: App, body: TrailBundle): string {
  const signature = signWithHeadKey(head, exportMessage(body, sha256Hex));
  return canonicalJson({ body, publicKey: head.publicKey, signature });
}

async function bundle(
  db: Db,
  actor: Actor,
  job: JobRow,
  { clock, keys: { workshopKeys } }: App,
): Promise<TrailBundle> {
  const rows = await listTrailRows(db, job.id, { after: 0, limit: Number.MAX_SAFE_INTEGER });
  const entries = rows.map(({ body, hash, signature, key }) => ({
    recorded: JSON.parse(body) as Recorded,
    hash,
    signature,
    key,
  }));
  const keys = await readKeys(db, unique(rows.flatMap(({ key }) => key ?? [])));
  const named = unique([
    ...entries.map(({ recorded }) => recorded.workshop),
    ...keys.map(({ workshop }) => workshop),
  ]);
  return {
    v: 1,
    format: TRAIL_FORMAT,
    exportedAt: stamp(clock),
    job: { id: job.id, number: job.number },
    plans: await readPlans(db, job, entries),
    entries,
    keys,
    workshop: await readWorkshopEntries(db, job.id, named),
    heads: (await listSignedHeads(db, job.id)).map(toHead),
    workshopKeys,
    identity: await identityOf(db, actor, job.id, entries[0]?.recorded),
    photographs: await photographsIn(db, entries),
  };
}

async function readPlans(db: Db, job: JobRow, entries: TrailBundle['entries']): Promise<unknown[]> {
  const hashes = entries.flatMap(({ recorded }) =>
    recorded.kind === 'plan-moved' ? [recorded.plan, recorded.data.to] : [recorded.plan],
  );
  return Promise.all(unique([...hashes, job.plan_hash]).map((hash) => getPlan(db, hash)));
}

async function readKeys(db: Db, ids: readonly string[]): Promise<TrailBundle['keys']> {
  if (ids.length === 0) return [];
  return db
    .selectFrom('author_key')
    .select([
      'id',
      'person_id as person',
      'device_id as device',
      'public_key as publicKey',
      'workshop_seq as workshop',
    ])
    .where('id', 'in', ids)
    .orderBy('workshop_seq')
    .execute();
}

async function readWorkshopEntries(
  db: Db,
  job: string,
  named: readonly number[],
): Promise<TrailBundle['workshop']> {
  const rows = await db
    .selectFrom('workshop_entry')
    .select(['seq', 'kind', 'body', 'hash'])
    .where((eb) => eb.or([eb('seq', 'in', named), eb('kind', 'in', ['job-opened', 'head-signed'])]))
    .orderBy('seq')
    .execute();
  const wanted = new Set(named);
  return rows.flatMap(({ seq, body, hash }) => {
    const recorded = JSON.parse(body) as { data: Record<string, unknown> } & Record<string, unknown>;
    const isOfJob = recorded.data.job === job || recorded.data.trail === job;
    return wanted.has(seq) || isOfJob ? [{ recorded, hash }] : [];
  });
}

/** A row of the table may hold more than what is signed. */
function toHead({ trail, seq, hash, at, key, signature }: SignedHead): SignedHead {
  return { trail, seq, hash, at, key, signature };
}

async function identityOf(
  db: Db,
  actor: Actor,
  job: string,
  opened: Recorded | undefined,
): Promise<TrailBundle['identity']> {
  const committed = opened?.kind === 'opened' ? Object.keys(opened.data.commitments) : [];
  const { known, withheld } = await readIdentity(db, actor, job);
  const values = new Map(Object.entries(known));
  return Object.fromEntries(
    committed.map((field) => [
      field,
      values.get(field) ?? (withheld.includes(field) ? 'withheld' : 'erased'),
    ]),
  );
}

async function photographsIn(db: Db, entries: TrailBundle['entries']): Promise<TrailBundle['photographs']> {
  const sizes = new Map<string, number>();
  const erased = new Set<string>();
  for (const { recorded } of entries) {
    if (recorded.kind === 'photographed') sizes.set(recorded.data.photo, recorded.data.bytes);
    if (recorded.kind === 'erased') for (const hash of recorded.data.photographs) erased.add(hash);
  }
  const rows = await db
    .selectFrom('photo')
    .select('hash')
    .where('hash', 'in', [...sizes.keys()])
    .execute();
  const kept = new Set(rows.map(({ hash }) => hash));
  return [...sizes].map(([hash, bytes]) => ({
    hash,
    bytes,
    state: kept.has(hash) ? 'kept' : erased.has(hash) ? 'erased' : 'missing',
  }));
}

function unique<T>(values: readonly T[]): T[] {
  return [...new Set(values)];
}
