import { copyFileSync, mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import SqliteDatabase from 'better-sqlite3';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest';
import { openDatabase } from '@/server/database';
import { checkRecord, type RecordCheck } from '@/server/record-check';
import { Bay, handOver } from '../support/bay';

/*
 * The tables of the record refuse every change that SQL can ask for on the program's own connection. What SQLite
 * lets no trigger see (dropping the trigger or the table, writing the schema, bytes of the file) only the holder
 * of the file can do, and the check of the record finds what they changed.
 */

vi.setConfig({ testTimeout: 60_000, hookTimeout: 60_000 });

const TABLES = ['job_entry', 'workshop_entry', 'signed_head', 'refused_entry', 'plan'] as const;
type TableName = (typeof TABLES)[number];

let folder: string;
let file: string;
let workshopKeys: { key: string; publicKey: string }[];

beforeAll(async () => {
  const bay = await Bay.open();
  const { ann, supervisor } = bay.shop.people;
  // A refused entry, three signatures with their heads, and a whole job.
  await bay.pushed({ kind: 'done', step: 'strip.cap-off@rod1', data: {} }, ann);
  await bay.workTo('build.hand-over');
  expect(await bay.pushed(handOver, supervisor)).toMatchObject({ verdict: 'recorded' });
  workshopKeys = bay.shop.app.keys.workshopKeys;
  folder = mkdtempSync(path.join(tmpdir(), 'witnessmark-tables-'));
  file = path.join(folder, 'witnessmark.db');
  const made = new SqliteDatabase(path.join(bay.shop.app.settings.dataDir, 'witnessmark.db'));
  made.prepare('vacuum into ?').run(`${file}.whole`);
  made.close();
});

beforeEach(() => copyFileSync(`${file}.whole`, file));

afterEach(() => {
  for (const end of ['-wal', '-shm']) rmSync(`${file}${end}`, { force: true });
});

afterAll(() => rmSync(folder, { recursive: true, force: true }));

async function check(): Promise<RecordCheck> {
  const db = openDatabase(file);
  try {
    return await checkRecord(db, workshopKeys);
  } finally {
    await db.destroy();
  }
}

/** Runs statements on a connection of their own: with the settings of the program's, or with SQLite's usual ones. */
function onSettings(recursiveTriggers: string, run: (database: SqliteDatabase.Database) => void): void {
  const database = new SqliteDatabase(file);
  try {
    database.pragma(`recursive_triggers = ${recursiveTriggers}`);
    run(database);
  } finally {
    database.close();
  }
}

interface Column {
  name: string;
  type: string;
  pk: number;
}

/** By one of our triggers. */
const REFUSED = /never (changed|deleted)|only added to|kept as it came/;

const columnsOf = (database: SqliteDatabase.Database, table: TableName) =>
  database.pragma(`table_info(${table})`) as Column[];

const contentOf = (database: SqliteDatabase.Database) =>
  TABLES.map((table) => JSON.stringify(database.prepare(`select * from ${table} order by 1, 2, 3`).all()));

describe.each(TABLES)('the table %s', (table) => {
  it('refuses UPDATE of each of its columns, also to the same value, and DELETE', () => {
    onSettings('on', (database) => {
      const before = contentOf(database);
      expect(database.prepare(`select count(*) from ${table}`).pluck().get()).toBeGreaterThan(0);
      for (const { name, type } of columnsOf(database, table)) {
        const value = type === 'INTEGER' ? '7' : `'x'`;
        const nothing = type === 'INTEGER' ? '0' : 'null';
        expect(() => database.exec(`update ${table} set ${name} = ${name}`), name).toThrow(REFUSED);
        expect(() => database.exec(`update or ignore ${table} set ${name} = ${value}`), name).toThrow(
          REFUSED,
        );
        expect(() => database.exec(`update or replace ${table} set ${name} = ${nothing}`), name).toThrow(
          REFUSED,
        );
      }
      for (const statement of [
        `delete from ${table}`,
        `delete from ${table} where rowid in (select max(rowid) from ${table})`,
        `with gone as (select rowid as id from ${table}) delete from ${table} where rowid in (select id from gone)`,
      ])
        expect(() => database.exec(statement), statement).toThrow(REFUSED);
      expect(contentOf(database)).toEqual(before);
    });
  });

  it.each([
    ['ours', 'on'],
    ['another program’s', 'off'],
  ])('is not changed by INSERT OR REPLACE, REPLACE and UPSERT on %s settings', (_, triggers) => {
    onSettings(triggers, (database) => {
      const before = contentOf(database);
      const columns = columnsOf(database, table);
      const keys = columns.filter(({ pk }) => pk > 0).map(({ name }) => name);
      const other = columns.find(({ name, pk }) => pk === 0 && name !== 'id')!.name;
      const names = columns.map(({ name }) => name).join(', ');
      // The same row, one of another content under its key, and one that takes its id or hash to another place.
      const elsewhere = keys.includes('seq')
        ? `(select max(seq) + 1 from ${table} as other ${sameTrail(table)})`
        : 'seq';
      const places = keys.includes('seq') ? ['seq', elsewhere] : [''];
      for (const place of places) {
        const values = columns.map(({ name }) => (name === 'seq' && place !== '' ? place : name)).join(', ');
        const row = `select ${values} from ${table} where true order by rowid limit 1`;
        // A head of the next number is another head; it would take nobody's place.
        if (table === 'signed_head' && place === elsewhere) continue;
        attempt(database, `insert or replace into ${table} (${names}) ${row}`);
        attempt(database, `replace into ${table} (${names}) ${row}`);
      }
      attempt(
        database,
        `insert into ${table} (${names}) select ${names} from ${table} where true limit 1
           on conflict (${keys.join(', ')}) do update set ${other} = excluded.${other}`,
      );
      expect(contentOf(database)).toEqual(before);
    });
  });

  it('keeps its triggers under another name', () => {
    onSettings('on', (database) => {
      database.exec(`alter table ${table} rename to renamed`);
      const [{ name }] = database.pragma('table_info(renamed)') as [Column];
      expect(() => database.exec(`update renamed set ${name} = ${name}`)).toThrow(REFUSED);
      expect(() => database.exec('delete from renamed')).toThrow(REFUSED);
    });
  });
});

const sameTrail = (table: TableName) => (table === 'job_entry' ? `where other.job_id = ${table}.job_id` : '');

/** By a trigger, or by SQLite itself; a plan that is there is passed over without a word. */
function attempt(database: SqliteDatabase.Database, statement: string): void {
  try {
    database.exec(statement);
    expect(statement).toMatch(/into plan /);
  } catch (error) {
    if (!(error instanceof SqliteDatabase.SqliteError)) throw error;
    expect(error.message).toMatch(REFUSED);
  }
}

/** A change to the file by somebody who drops what refuses it. */
function tamper(...statements: string[]): void {
  const database = new SqliteDatabase(file);
  const names = database.prepare<[], string>("select name from sqlite_master where type = 'trigger'").pluck();
  for (const name of names.all()) database.exec(`drop trigger "${name}"`);
  database.pragma('foreign_keys = off');
  for (const statement of statements) database.exec(statement);
  database.close();
}

describe('what no trigger can stop', () => {
  it('leaves nothing to find in a file that nobody changed', async () => {
    const { breaks, jobs, entries, heads } = await check();
    expect(breaks).toEqual([]);
    expect([jobs, heads]).toEqual([1, 4]);
    expect(entries).toBeGreaterThan(150);
  });

  const ONE = 'where seq = 9';
  const SIGNED = `where kind = 'signed'`;
  it.each([
    ['job_entry', 'seq', 'update job_entry set seq = seq + 1000 where seq > 50'],
    ['job_entry', 'id', `update job_entry set id = 'x' ${ONE}`],
    ['job_entry', 'kind', `update job_entry set kind = 'placed' ${ONE}`],
    ['job_entry', 'step', `update job_entry set step = 'build.side@rod1' ${ONE}`],
    [
      'job_entry',
      'by_person',
      `update job_entry set by_person = (select by_person from job_entry where seq = 1) ${ONE}`,
    ],
    ['job_entry', 'device_id', `update job_entry set device_id = 'x' ${ONE}`],
    ['job_entry', 'device_seq', `update job_entry set device_seq = 900 ${ONE}`],
    ['job_entry', 'at', `update job_entry set at = '2031-05-06T06:00:00.000Z' ${ONE}`],
    ['job_entry', 'recorded_at', `update job_entry set recorded_at = '2031-05-06T06:00:00.000Z' ${ONE}`],
    ['job_entry', 'body', `update job_entry set body = json_set(body, '$.author.name', 'Somebody') ${ONE}`],
    ['job_entry', 'content_hash', `update job_entry set content_hash = '${'a'.repeat(64)}' ${ONE}`],
    ['job_entry', 'hash', `update job_entry set hash = '${'a'.repeat(64)}' ${ONE}`],
    [
      'job_entry',
      'signature',
      `update job_entry set signature = null, by_person = null, device_id = null ${SIGNED}`,
    ],
    [
      'job_entry',
      'key_id',
      `update job_entry set key_id = (select id from author_key where person_id <> job_entry.by_person) ${ONE}`,
    ],
    ['job_entry', 'row', `delete from job_entry ${ONE}`],
    ['job_entry', 'row', `delete from job_entry where seq > 60`],
    ['workshop_entry', 'seq', 'update workshop_entry set seq = seq + 1000 where seq > 5'],
    ['workshop_entry', 'id', `update workshop_entry set id = 'x' where seq = 5`],
    ['workshop_entry', 'kind', `update workshop_entry set kind = 'exported' where seq = 5`],
    ['workshop_entry', 'by_person', `update workshop_entry set by_person = null where seq = 5`],
    ['workshop_entry', 'at', `update workshop_entry set at = '2031-05-06T06:00:00.000Z' where seq = 5`],
    ['workshop_entry', 'body', `update workshop_entry set body = json_set(body, '$.by', 'x') where seq = 5`],
    [
      'workshop_entry',
      'content_hash',
      `update workshop_entry set content_hash = '${'a'.repeat(64)}' where seq = 5`,
    ],
    ['workshop_entry', 'hash', `update workshop_entry set hash = '${'a'.repeat(64)}' where seq = 5`],
    ['workshop_entry', 'row', `delete from workshop_entry where seq = 5`],
    ['signed_head', 'trail', `update signed_head set trail = 'workshop'`],
    ['signed_head', 'seq', `update signed_head set seq = seq - 1`],
    ['signed_head', 'hash', `update signed_head set hash = '${'a'.repeat(64)}'`],
    ['signed_head', 'at', `update signed_head set at = '2031-05-06T06:00:00.000Z'`],
    ['signed_head', 'key', `update signed_head set key = '${'a'.repeat(64)}'`],
    ['signed_head', 'signature', `update signed_head set signature = '${'A'.repeat(86)}'`],
    ['signed_head', 'row', 'delete from signed_head where seq = (select min(seq) from signed_head)'],
    ['refused_entry', 'job_id', 'update refused_entry set job_id = null'],
    ['refused_entry', 'content_hash', `update refused_entry set content_hash = '${'a'.repeat(64)}'`],
    ['refused_entry', 'body', `update refused_entry set body = replace(body, 'cap-off', 'cap-on')`],
    ['refused_entry', 'code', `update refused_entry set code = 'role'`],
    ['refused_entry', 'message', `update refused_entry set message = 'no reason'`],
    ['refused_entry', 'by_person', 'update refused_entry set by_person = null'],
    ['refused_entry', 'row', 'delete from refused_entry'],
    ['plan', 'body', `update plan set body = replace(body, '"target":"80"', '"target":"90"')`],
    ['plan', 'hash', `update plan set hash = '${'a'.repeat(64)}'`],
    ['plan', 'row', 'delete from plan'],
  ])('is found by the check of the record: %s, %s', async (_table, _what, statement) => {
    tamper(statement);
    expect((await check()).breaks).not.toEqual([]);
  });
});
