import SqliteDatabase from 'better-sqlite3';
import { Kysely, SqliteAdapter, SqliteDialect, type Transaction } from 'kysely';
import type { Database } from '@db/tables';

/** The database outside a transaction. Inside one, use the transaction alone: there is one connection. */
export type Db = Kysely<Database>;

/** An open transaction; a function that must be atomic asks for it in its type. */
export type Trx = Transaction<Database>;

/** SQLite can change its tables inside a transaction, so that a migration happens whole or not at all. */
class TransactionalSqliteAdapter extends SqliteAdapter {
  override get supportsTransactionalDdl(): boolean {
    return true;
  }
}

class WitnessmarkSqliteDialect extends SqliteDialect {
  override createAdapter(): SqliteAdapter {
    return new TransactionalSqliteAdapter();
  }
}

/**
 * Opens the database file.
 *
 * What is acknowledged is on disk: write-ahead log with `synchronous=FULL`. `recursive_triggers` makes the
 * triggers that refuse deletion see the row that an INSERT OR REPLACE would push out.
 */
export function openDatabase(file: string): Db {
  const sqlite = new SqliteDatabase(file);
  sqlite.pragma('journal_mode = WAL');
  sqlite.pragma('synchronous = FULL');
  sqlite.pragma('foreign_keys = ON');
  sqlite.pragma('recursive_triggers = ON');
  sqlite.pragma('busy_timeout = 5000');
  return new Kysely<Database>({ dialect: new WitnessmarkSqliteDialect({ database: sqlite }) });
}
