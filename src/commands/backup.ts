import path from 'node:path';
import { writeBackup } from '@/server/backup';
import { systemClock } from '@/server/clock';
import { readSettings } from '@/server/settings';
import { readPassphrase } from './passphrase';

/*
 * npm run backup -- FILE
 *
 * Packs database, photographs and keys of DATA_DIR into one archive, also while the server runs; the keys are
 * sealed under a passphrase. Exit 0 written, 1 not.
 */

const USAGE = `Use it like this: npm run backup -- FILE
  FILE  where the archive is to be written, as workshop-2031-05-06.tar
The passphrase for the keys is asked for, or taken from BACKUP_PASSPHRASE.`;

/** Makes the backup and prints what is in it. */
export async function main(args: string[], cwd: string): Promise<number> {
  const [name, ...more] = args;
  if (name === undefined || name.startsWith('-') || more.length > 0) return say(`Name one file.\n${USAGE}`);
  try {
    const { dataDir, bucket } = readSettings(process.env, process.cwd());
    const passphrase = await readPassphrase(process.env, { twice: true });
    const file = path.resolve(cwd, name);
    const { database, photographs, missing } = await writeBackup(dataDir, file, passphrase, {
      clock: systemClock,
      hasBucket: bucket !== undefined,
    });
    console.log(`Written: ${file}`);
    console.log(
      `Database of ${Math.ceil(database.bytes / 1000)} kB, ${photographs} picture files, and the keys.`,
    );
    if (bucket !== undefined)
      console.log(`Photographs lie in the bucket ${bucket.bucket}: back it up there.`);
    for (const hash of missing) console.log(`Photograph ${hash} was not in the data folder.`);
    console.log('Keep the passphrase elsewhere: without it the keys are lost.');
    return 0;
  } catch (error) {
    return say(error instanceof Error ? error.message : String(error));
  }
}

function say(words: string): number {
  console.error(words);
  return 1;
}
