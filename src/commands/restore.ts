import path from 'node:path';
import { parseArgs } from 'node:util';
import { systemClock } from '@/server/clock';
import { restoreBackup } from '@/server/restore';
import { readSettings } from '@/server/settings';
import { readPassphrase } from './passphrase';

/*
 * npm run restore -- FILE [--erasures FILE] [--even-if-broken]
 *
 * Makes the data folder anew from a backup, after checking the database, every chain and every photograph.
 * DATA_DIR must be empty or not there. Exit 0 restored, 1 not.
 */

const USAGE = `Use it like this: npm run restore -- FILE [--erasures FILE] [--even-if-broken]
  FILE  an archive that npm run backup has written
  --erasures  erasures.jsonl of the data folder that is replaced, so that what was erased since stays erased
The passphrase is asked for, or taken from BACKUP_PASSPHRASE.`;

/** Restores and prints what was checked. */
export async function main(args: string[], cwd: string): Promise<number> {
  try {
    const { values, positionals } = parseArgs({
      args,
      options: { 'even-if-broken': { type: 'boolean', default: false }, erasures: { type: 'string' } },
      allowPositionals: true,
    });
    const [name, ...more] = positionals;
    if (name === undefined || more.length > 0) return say(`Name one file.\n${USAGE}`);
    const { dataDir } = readSettings(process.env, process.cwd());
    const passphrase = await readPassphrase(process.env, { twice: false });
    const restored = await restoreBackup(path.resolve(cwd, name), dataDir, passphrase, {
      clock: systemClock,
      evenIfBroken: values['even-if-broken'],
      erasures: values.erasures === undefined ? undefined : path.resolve(cwd, values.erasures),
    });
    const { jobs, entries, heads, breaks } = restored.check;
    console.log(`Restored: ${dataDir}, as it was at ${restored.madeAt}.`);
    console.log(`Checked: ${jobs} jobs, ${entries} entries, ${heads} signed heads.`);
    for (const { trail, seq, why } of breaks) console.log(`Broken: trail ${trail}, entry ${seq}: ${why}`);
    for (const hash of restored.missing) console.log(`Photograph ${hash} is not in the backup.`);
    console.log('What tablets recorded since comes back by itself when they next reach the server.');
    return 0;
  } catch (error) {
    return say(error instanceof Error ? error.message : String(error));
  }
}

function say(words: string): number {
  console.error(words);
  return 1;
}
