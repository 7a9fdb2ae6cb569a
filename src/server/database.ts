import SqliteDatabase from 'better-sqlite3';
import {
  Kysely,
  SqliteAdapter,
  type SqliteDatabase as KyselyDatabase,
  SqliteDialect,
  type SqliteStatement as KyselyStatement,
  type Transaction,
} from 'kysely';
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
  return new Kysely<Database>({
    dialect: new WitnessmarkSqliteDialect({ database: keepStatements(sqlite) }),
  });
}

/** More than the program has; texts with lists of values in them come in many lengths. */
const STATEMENTS_KEPT = 1000;
const CHANGES_TABLES = /^\s*(create|alter|drop|vacuum|pragma)\b/i;
const READS_OR_WRITES_ROWS = /^\s*(select|insert|update|delete)\b/i;

/** Prepares each text once: what is asked with every request is most of what the server asks. */
function keepStatements(sqlite: SqliteDatabase.Database): KyselyDatabase {
  const kept = new Map<string, KyselyStatement>();
  return {
    prepare(text) {
      const known = kept.get(text);
      if (known !== undefined) return known;
      // Nothing that was prepared outlives a change of the tables.
      const isOfRows = READS_OR_WRITES_ROWS.test(text);
      if (kept.size >= STATEMENTS_KEPT || (!isOfRows && CHANGES_TABLES.test(text))) kept.clear();
      const made = sqlite.prepare(text) as unknown as KyselyStatement;
      if (isOfRows) kept.set(text, made);
      return made;
    },
    close: () => void sqlite.close(),
  };
}
