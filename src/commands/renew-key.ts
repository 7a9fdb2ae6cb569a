import { systemClock, stamp } from '@/server/clock';
import { renewHeadKey } from '@/server/keys';
import { readSettings } from '@/server/settings';

/*
 * npm run renew-key
 *
 * Makes the workshop a new key for its heads and exports, signed by the one before it. Stop the server first: it
 * goes on signing with the key that it read at its start. Exit 0 made, 1 not.
 */

/** Makes the new key and prints both fingerprints. */
export function main(): Promise<number> {
  try {
    const { dataDir } = readSettings(process.env, process.cwd());
    const { before, now } = renewHeadKey(dataDir, stamp(systemClock));
    console.log(`The workshop's key was ${before}.`);
    console.log(`It is ${now} from the next start on, signed by the one before.`);
    console.log('Make a backup now, and give the new fingerprint to whoever compares it.');
    return Promise.resolve(0);
  } catch (error) {
    console.error(error instanceof Error ? error.message : String(error));
    return Promise.resolve(1);
  }
}
