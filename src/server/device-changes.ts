import type { DeviceRow } from '@db/tables';
import { type Actor, requireRole } from './actor';
import type { App } from './compose';
import { type Device, lockDevice, toDevice } from './devices';
import { AppError, notFound } from './errors';
import { type JobFold, rememberFolds } from './job-fold';
import { recordLoss } from './lost-tablets';
import type { Recording } from './office-entries';
import { appendWorkshopEntry } from './workshop-trail';

/** What is to be different about a tablet. */
export interface DeviceChange {
  name?: string | undefined;
  state?: 'active' | 'lost' | undefined;
  /** Why it is declared lost. */
  reason?: string | undefined;
}

/** Renames a tablet, declares it lost, or takes it back into use. */
export async function changeDevice(
  app: App,
  actor: Actor,
  id: string,
  change: DeviceChange,
): Promise<Device> {
  requireRole(actor, 'owner', 'supervisor');
  const memory = app.db;
  const { device, folds } = await app.db.transaction().execute(async (trx) => {
    // A write first, so that the transaction holds the write lock from its beginning.
    await lockDevice(trx, id);
    const row = await trx.selectFrom('device').selectAll().where('id', '=', id).executeTakeFirst();
    if (row === undefined) throw notFound('This tablet');
    return applyChange({ app, memory, trx }, actor, row, change);
  });
  rememberFolds(app.db, folds);
  return device;
}

async function applyChange(
  within: Recording,
  actor: Actor,
  row: DeviceRow,
  { reason, ...change }: DeviceChange,
): Promise<{ device: Device; folds: JobFold[] }> {
  const { app, trx } = within;
  const { id } = row;
  const next = { ...row, name: change.name ?? row.name, state: change.state ?? row.state };
  const isLoss = next.state === 'lost' && row.state !== 'lost';
  if (isLoss && reason === undefined) {
    throw new AppError(
      'invalid-field',
      'reason: say how the tablet was lost. It stands in the trail. Nothing was changed.',
      { field: 'reason' },
    );
  }
  // The jobs first: what they are judged by is read before anything is added to the workshop's trail.
  const folds = isLoss ? await recordLoss(within, actor, next, reason ?? '') : [];
  if (next.name !== row.name) {
    const data = { tablet: id, from: row.name, to: next.name };
    await appendWorkshopEntry(trx, actor, { kind: 'tablet-renamed', data }, app);
  }
  if (next.state === 'active' && row.state !== 'active') {
    await appendWorkshopEntry(
      trx,
      actor,
      { kind: 'tablet-found', data: { tablet: id, name: next.name } },
      app,
    );
  }
  await trx.updateTable('device').set({ name: next.name, state: next.state }).where('id', '=', id).execute();
  return { device: toDevice(next), folds };
}
