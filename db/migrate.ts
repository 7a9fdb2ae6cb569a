import { type Kysely, type MigrationProvider, Migrator } from 'kysely';
import * as signIn from './migrations/0001-sign-in';
import * as workshop from './migrations/0002-workshop';
import * as jobs from './migrations/0003-jobs';
import * as headsAndPhotos from './migrations/0004-heads-photos';
import * as mail from './migrations/0005-mail';
import * as noReplace from './migrations/0006-no-replace';
import * as judgedCalibrations from './migrations/0007-judged-calibrations';
import * as authorisations from './migrations/0008-authorisations';

/** Frozen once merged: a change to the tables is a new file here, never an edit of an old one. */
const migrations = {
  '0001-sign-in': signIn,
  '0002-workshop': workshop,
  '0003-jobs': jobs,
  '0004-heads-photos': headsAndPhotos,
  '0005-mail': mail,
  '0006-no-replace': noReplace,
  '0007-judged-calibrations': judgedCalibrations,
  '0008-authorisations': authorisations,
};

const provider: MigrationProvider = { getMigrations: () => Promise.resolve(migrations) };

/**
 * Brings the tables up to date and returns the names of the migrations that ran.
 *
 * The whole run is one transaction (the dialect in src/server/database.ts says that SQLite can do this), so
 * a crash half-way leaves the database as it was.
 */
export async function migrate<T>(db: Kysely<T>): Promise<string[]> {
  const { error, results } = await new Migrator({ db, provider }).migrateToLatest();
  if (error !== undefined) {
    const failed = results?.find((result) => result.status === 'Error')?.migrationName ?? 'the first step';
    throw new Error(`The database could not be brought up to date (${failed}). Nothing was changed in it.`, {
      cause: error,
    });
  }
  return results?.map((result) => result.migrationName) ?? [];
}
