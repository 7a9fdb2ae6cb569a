import { createPublicKey, type KeyObject, verify } from 'node:crypto';
import { createServer, type IncomingMessage } from 'node:http';
import type { AddressInfo } from 'node:net';
import SqliteDatabase from 'better-sqlite3';
import { assertHashable, bytesOf, canonicalWithout } from '@/domain/canonical';
import type { Entry } from '@/domain/entry';
import { SERVER_FIELDS } from '@/domain/trail-hash';
import { sha256Hex } from '@/server/crypto';

/*
 * The bare twin of the sync endpoint, a process of its own: the same bytes over HTTP, the same JSON, canonical
 * forms, hashes and signature checks, and the same rows put into the same table by one transaction a push, on
 * disk before it is answered. It knows no rules and keeps no state of a job but the head of its trail.
 */

interface Pushed {
  entry: Entry;
  signature: string;
  key: string;
}

const ADDED: ReadonlySet<string> = new Set(SERVER_FIELDS);

const [file] = process.argv.slice(2);
const database = new SqliteDatabase(file);
for (const setting of ['journal_mode = WAL', 'synchronous = FULL', 'foreign_keys = ON']) {
  database.pragma(setting);
}
const keys = new Map(
  database
    .prepare<[], { id: string; public_key: string }>('select id, public_key from author_key')
    .all()
    .map((row) => [row.id, readKey(row.public_key)]),
);
const heads = new Map(
  database
    .prepare<[], { job_id: string; seq: number; hash: string }>(
      'select job_id, seq, hash from job_entry order by seq',
    )
    .all()
    .map(({ job_id: job, seq, hash }) => [job, { seq, hash }]),
);
const insert = database.prepare(
  `insert into job_entry (job_id, seq, id, kind, step, by_person, device_id, device_seq, at, recorded_at, body,
    content_hash, hash, signature, key_id) values (@job, @seq, @id, @kind, @step, @by, @device, @deviceSeq, @at,
    @recordedAt, @body, @contentHash, @hash, @signature, @key)`,
);
const insertAll = database.transaction((rows: object[]) => {
  for (const row of rows) insert.run(row);
});

const server = createServer((request, response) => {
  take(request).then(
    (answer) => response.setHeader('content-type', 'application/json').end(answer),
    (error: unknown) => response.writeHead(500).end(String(error)),
  );
});
server.listen(0, '127.0.0.1', () => {
  process.stdout.write(`${(server.address() as AddressInfo).port}\n`);
});
process.once('SIGTERM', () => {
  database.close();
  process.exit();
});

async function take(request: IncomingMessage): Promise<string> {
  const chunks: Buffer[] = [];
  for await (const chunk of request) chunks.push(chunk as Buffer);
  const { entries, sentAt } = JSON.parse(Buffer.concat(chunks).toString('utf8')) as {
    entries: Pushed[];
    sentAt: string;
  };
  const recordedAt = new Date().toISOString();
  const clockOffsetMs = Date.parse(sentAt) - Date.parse(recordedAt);
  const rows = entries.map((pushed) => toRow(pushed, { recordedAt, clockOffsetMs }));
  const proofs = await Promise.all(
    rows.map(({ key, contentHash, signature }) => prove(keys.get(key), contentHash, signature)),
  );
  if (proofs.includes(false)) throw new Error('A signature does not hold.');
  insertAll(rows);
  const verdicts = rows.map(({ id, seq, hash }) => ({ id, verdict: 'recorded', seq, hash }));
  return JSON.stringify({ at: recordedAt, verdicts, jobs: [], workshop: 0, clockOffsetMs });
}

function toRow(
  { entry, signature, key }: Pushed,
  { recordedAt, clockOffsetMs }: { recordedAt: string; clockOffsetMs: number },
) {
  const head = heads.get(entry.job);
  if (head === undefined) throw new Error('There is no such job.');
  const seq = head.seq + 1;
  assertHashable(entry);
  const [body, content] = canonicalWithout(
    { ...entry, seq, recordedAt, prev: head.hash, clockOffsetMs },
    ADDED,
  );
  const hash = sha256Hex(bytesOf(body));
  heads.set(entry.job, { seq, hash });
  const { job, id, kind, step = null, by, device, deviceSeq, at } = entry;
  const contentHash = sha256Hex(bytesOf(content));
  return {
    ...{ job, seq, id, kind, step, by, device, deviceSeq, at },
    ...{ recordedAt, body, contentHash, hash, signature, key },
  };
}

function readKey(publicKey: string): KeyObject {
  const point = Buffer.from(publicKey, 'base64url');
  const x = point.subarray(1, 33).toString('base64url');
  const y = point.subarray(33).toString('base64url');
  return createPublicKey({ key: { kty: 'EC', crv: 'P-256', x, y }, format: 'jwk' });
}

/** On one of the threads that Node keeps for this, so that the twin has both cores as the program has. */
function prove(key: KeyObject | undefined, contentHash: string, signature: string): Promise<boolean> {
  if (key === undefined) return Promise.resolve(false);
  const message = Buffer.from(contentHash, 'ascii');
  const bytes = Buffer.from(signature, 'base64url');
  return new Promise((resolve, reject) => {
    verify('sha256', message, { key, dsaEncoding: 'ieee-p1363' }, bytes, (error, holds) =>
      error === null ? resolve(holds) : reject(error),
    );
  });
}
