import type { EntryData } from '@/domain/entry';
import type { App } from './compose';
import type { Db, Trx } from './database';
import { storeFolds, type JobFold } from './job-fold';
import { beginBatch, changedFolds, flush, foldOf, recordByServer } from './sync-batch';
import { notFound } from './errors';
import { readWorkshopHistory } from './workshop-history';

/** An entry that the server makes for the record itself, outside any push. */
export type OfficeEntry = { job: string } & (
  { kind: 'tablet-lost'; data: EntryData<'tablet-lost'> } | { kind: 'erased'; data: EntryData<'erased'> }
);

/** A transaction, and the database under which what was read before is remembered. */
export interface Recording {
  app: App;
  memory: Db;
  trx: Trx;
}

/**
 * Appends such entries to their jobs' trails; call it before anything is appended to the workshop's trail in the
 * same transaction. What it gives is to be remembered once the transaction is committed.
 */
export async function recordOfficeEntries(
  { app, memory, trx }: Recording,
  entries: readonly OfficeEntry[],
): Promise<JobFold[]> {
  const history = await readWorkshopHistory(memory, trx);
  const batch = await beginBatch(
    {
      ...{ app, trx, history, clockOffsetMs: 0, isCareful: true, device: undefined },
      ...{ receivedAt: app.clock.now().toISOString(), pins: new Map(), proofs: new Map() },
    },
    [],
  );
  for (const { job, ...made } of entries) {
    const fold = await foldOf(batch, job);
    if (fold === undefined) throw notFound('This job');
    recordByServer(batch, fold, { id: app.ids.next(), ...made });
  }
  await flush(batch);
  const folds = changedFolds(batch);
  await storeFolds(trx, folds);
  return folds;
}
