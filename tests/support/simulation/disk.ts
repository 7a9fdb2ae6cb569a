/* The disk of a tablet: full, copied to another tablet, or opened by the next version of the program. */
import 'fake-indexeddb/auto';
import type { Table } from 'dexie';
import { openFloorDatabase, type FloorDatabase } from '@/offline/database';

interface RawTransaction {
  db: unknown;
  _state: string;
  abort(): void;
}

interface RawConnection {
  name: string;
  _rawDatabase: { transactions: RawTransaction[] };
}

interface RawStore {
  transaction: {
    db: RawConnection;
    _execRequestAsync(request: { source: unknown; operation: () => never }): IDBRequest;
  };
}

type Write = (this: RawStore, ...args: unknown[]) => IDBRequest;

const fullDisks = new Set<string>();

/** Says whether there is room for more on a tablet's disk. */
export function setFull(name: string, isFull: boolean): void {
  if (isFull) fullDisks.add(name);
  else fullDisks.delete(name);
}

/** Makes writes to a full disk fail as a browser lets them: the request fails, and with it the transaction. */
export function watchQuota(): () => void {
  const store = IDBObjectStore.prototype as unknown as Record<'put' | 'add', Write>;
  const { put, add } = store;
  const orFull = (write: Write): Write =>
    function (...args) {
      if (!fullDisks.has(this.transaction.db.name)) return write.apply(this, args);
      return this.transaction._execRequestAsync({
        source: this,
        operation: () => {
          throw new DOMException('The disk is full.', 'QuotaExceededError');
        },
      });
    };
  Object.assign(store, { put: orFull(put), add: orFull(add) });
  return () => Object.assign(store, { put, add });
}

/** Which version of the program opens the records. */
export type Schema = 'present' | 'next';

/** Opens a tablet's database; the next version of the program has one more store and one more index. */
export function openDisk(name: string, schema: Schema): FloorDatabase {
  const db = openFloorDatabase(name);
  if (schema === 'next') {
    db.version(100).stores({ addedLater: 'id', outbox: '[job+place], id, where, key' });
  }
  return db;
}

/** What a killed page leaves of the transactions that it had under way: nothing. */
export function abortTransactions(db: FloorDatabase): void {
  if (!db.isOpen()) return;
  const connection = db.backendDB() as unknown as RawConnection;
  for (const transaction of [...connection._rawDatabase.transactions]) {
    if (transaction.db !== connection || transaction._state === 'finished') continue;
    if (transaction._state !== 'committing') transaction.abort();
  }
}

export type Rows = Map<string, unknown[]>;

/** Every row of a tablet's database. */
export async function readRows(db: FloorDatabase): Promise<Rows> {
  return db.transaction('r', db.tables, async () => {
    const rows: Rows = new Map();
    for (const table of db.tables) rows.set(table.name, await table.toArray());
    return rows;
  });
}

/** Writes rows into an empty database. */
export async function writeRows(db: FloorDatabase, rows: Rows): Promise<void> {
  await db.transaction('rw', db.tables, async () => {
    for (const table of db.tables) await (table as Table<unknown>).bulkPut(rows.get(table.name) ?? []);
  });
}
