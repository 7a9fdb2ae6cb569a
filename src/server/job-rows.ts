import type { JobState } from '@/domain/job-state';
import type { JobTable } from '@db/tables';
import type { Selectable } from 'kysely';
import type { Trx } from './database';
import type { JobFold } from './job-fold';

export type JobRow = Selectable<JobTable>;

const STATE_OF = {
  'not opened': 'open',
  running: 'open',
  parked: 'parked',
  'handed over': 'handed over',
  'ended unfinished': 'ended',
} as const satisfies Record<JobState['phase'], JobRow['state']>;

/** Brings the rows of jobs in line with what their entries made of them, so that lists can be asked for. */
export async function closeStates(trx: Trx, folds: readonly JobFold[]): Promise<void> {
  for (const fold of folds) {
    const state = STATE_OF[fold.state.phase];
    await trx
      .updateTable('job')
      .set({ state })
      .where('id', '=', fold.job)
      .where('state', '!=', state)
      .execute();
  }
}
