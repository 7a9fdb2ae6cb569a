import { createPublicKey, verify } from 'node:crypto';
import path from 'node:path';
import SqliteDatabase from 'better-sqlite3';
import type { RunningApp } from './app';

/** One row of a job's trail, as it lies in the file. */
export interface TrailRow {
  seq: number;
  id: string;
  kind: string;
  step: string | null;
  by: string;
  /** The author's name as the workshop has it. */
  name: string;
  device: string;
  deviceSeq: number;
  at: string;
  body: { data: Record<string, unknown> };
  contentHash: string;
  signature: string;
  publicKey: string;
  keyPerson: string;
  keyDevice: string;
}

/** Reads a job's trail straight from the SQLite file, past the program. */
export function readTrail(app: RunningApp, job: string): TrailRow[] {
  const db = new SqliteDatabase(path.join(app.dataDir, 'witnessmark.db'), { readonly: true });
  try {
    const rows = db
      .prepare(
        `select e.seq, e.id, e.kind, e.step, e.by_person as "by", p.printed_name as name, e.device_id as device,
                e.device_seq as deviceSeq, e.at, e.body, e.content_hash as contentHash, e.signature,
                k.public_key as publicKey, k.person_id as keyPerson, k.device_id as keyDevice
           from job_entry e
           left join person p on p.id = e.by_person
           left join author_key k on k.id = e.key_id
          where e.job_id = ? order by e.seq`,
      )
      .all(job) as (Omit<TrailRow, 'body'> & { body: string })[];
    return rows.map((row) => ({ ...row, body: JSON.parse(row.body) as TrailRow['body'] }));
  } finally {
    db.close();
  }
}

/** How many entries the server set aside for a job. */
export function countRefused(app: RunningApp, job: string): number {
  const db = new SqliteDatabase(path.join(app.dataDir, 'witnessmark.db'), { readonly: true });
  try {
    const { n } = db.prepare('select count(*) as n from refused_entry where job_id = ?').get(job) as {
      n: number;
    };
    return n;
  } finally {
    db.close();
  }
}

/** Whether the author's key signed this row: P-256 over the ASCII letters of its content hash. */
export function isSignedByAuthor({ publicKey, contentHash, signature }: TrailRow): boolean {
  const point = Buffer.from(publicKey, 'base64url');
  const key = createPublicKey({
    format: 'jwk',
    key: {
      kty: 'EC',
      crv: 'P-256',
      x: point.subarray(1, 33).toString('base64url'),
      y: point.subarray(33).toString('base64url'),
    },
  });
  return verify(
    'sha256',
    Buffer.from(contentHash, 'ascii'),
    { key, dsaEncoding: 'ieee-p1363' },
    Buffer.from(signature, 'base64url'),
  );
}
