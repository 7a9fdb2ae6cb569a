import { getMigrations } from 'better-auth/db/migration';
import { sql } from 'kysely';
import { describe, expect, it } from 'vitest';
import { authOptions } from '@/server/auth';
import { closeApp, openApp } from '@/server/compose';
import { openTestApp } from '../support/database';

describe('the tables', () => {
  it('leave nothing for the installed sign-in library to create', async () => {
    const app = await openTestApp();
    const drift = await getMigrations(
      authOptions({
        db: app.db,
        secret: app.keys.signInSecret,
        publicUrl: 'http://localhost:4321',
        log: app.log,
        ids: app.ids,
      }),
    );
    expect(drift.toBeCreated).toEqual([]);
    expect(drift.toBeAdded).toEqual([]);
    expect(drift.toBeAddedIndexes).toEqual([]);
    expect(drift.schemaProblems).toEqual([]);
    expect(drift.unsafeChanges).toEqual([]);
  });

  it('are opened so that an acknowledged entry is on disk', async () => {
    const { db } = await openTestApp();
    const pragma = async (name: string) =>
      Object.values(
        (await sql<Record<string, unknown>>`${sql.raw(`pragma ${name}`)}`.execute(db)).rows[0] ?? {},
      )[0];
    expect(await pragma('journal_mode')).toBe('wal');
    expect(await pragma('synchronous')).toBe(2);
    expect(await pragma('foreign_keys')).toBe(1);
    expect(await pragma('recursive_triggers')).toBe(1);
  });

  it('of our own are strict', async () => {
    const { db } = await openTestApp();
    const { rows } = await sql<{ name: string; strict: number }>`
      select name, strict from pragma_table_list where schema = 'main' and type = 'table' and name not like 'sqlite%'`.execute(
      db,
    );
    const loose = rows
      .filter((row) => row.strict === 0)
      .map((row) => row.name)
      .sort();
    expect(loose).toEqual([
      'account',
      'kysely_migration',
      'kysely_migration_lock',
      'rateLimit',
      'session',
      'user',
      'verification',
    ]);
  });
});

describe('folded states that are stored', () => {
  it('are forgotten when the program starts, because its rules may be others than those that folded them', async () => {
    const app = await openTestApp();
    await sql`pragma foreign_keys = off`.execute(app.db);
    const row = { job_id: 'j', seq: 400, head_hash: 'h', state: '{}' };
    await app.db.insertInto('job_fold').values(row).execute();
    const again = await openApp(app.settings, app);
    const left = await again.db.selectFrom('job_fold').select('job_id').execute();
    await closeApp(again);
    expect(left).toEqual([]);
  });
});
