import { getMigrations } from 'better-auth/db/migration';
import { sql } from 'kysely';
import { describe, expect, it } from 'vitest';
import { authOptions } from '@/server/auth';
import { closeApp, openApp } from '@/server/compose';
import { openDatabase } from '@/server/database';
import * as signIn from '@db/migrations/0001-sign-in';
import * as workshop from '@db/migrations/0002-workshop';
import * as jobs from '@db/migrations/0003-jobs';
import * as headsAndPhotos from '@db/migrations/0004-heads-photos';
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

describe('the tables of an older version', () => {
  it('keep the workshop’s trail as it was, and guard it as before', async () => {
    const db = openDatabase(':memory:');
    const untyped = db as never;
    for (const { up } of [signIn, workshop, jobs]) await up(untyped);
    const run = (statement: string) => sql.raw(statement).execute(db);
    await run(`insert into "user" values ('p', 'P', 'p@witnessmark.example', 1, null, '', '')`);
    await run(`insert into person values ('p', 'P', 'p@witnessmark.example', '["owner"]', 1, '', null)`);
    for (const seq of [1, 2, 3])
      await run(`insert into workshop_entry values (${seq}, 'i${seq}', 'k', 'p', '', '{}', 'c', 'h${seq}')`);
    const before = await db.selectFrom('workshop_entry').selectAll().orderBy('seq').execute();
    await headsAndPhotos.up(untyped);
    expect(await db.selectFrom('workshop_entry').selectAll().orderBy('seq').execute()).toEqual(before);
    await expect(run(`update workshop_entry set at = 'x' where seq = 2`)).rejects.toThrow(/never changed/);
    await expect(run(`delete from workshop_entry where seq = 3`)).rejects.toThrow(/never deleted/);
    await expect(
      run(`insert into workshop_entry values (9, 'i9', 'k', 'p', '', '{}', 'c', 'h9')`),
    ).rejects.toThrow(/no gaps/);
    await expect(
      run(`insert into workshop_entry values (4, 'i4', 'k', 'nobody', '', '{}', 'c', 'h4')`),
    ).rejects.toThrow(/FOREIGN KEY/);
    await run(`insert into workshop_entry values (4, 'i4', 'k', null, '', '{}', 'c', 'h4')`);
    await db.destroy();
  });
});
