import { createInterface } from 'node:readline/promises';
import { Writable } from 'node:stream';
import { BackupError } from '@/server/backup';

/** Shorter ones are guessed. */
const LEAST = 12;

/** The passphrase of a backup: from BACKUP_PASSPHRASE, or asked for at the terminal without showing it. */
export async function readPassphrase(
  env: Readonly<Record<string, string | undefined>>,
  { twice }: { twice: boolean },
): Promise<string> {
  const given = env.BACKUP_PASSPHRASE;
  if (given !== undefined) return requireLong(given);
  if (!process.stdin.isTTY) {
    throw new BackupError(
      'There is no passphrase for the keys. Set BACKUP_PASSPHRASE, or run this at a terminal to be asked for it.',
    );
  }
  const first = requireLong(await ask('Passphrase for the keys in the backup: '));
  if (twice && (await ask('Once more: ')) !== first) {
    throw new BackupError('The two did not agree. Nothing was written; try again.');
  }
  return first;
}

function requireLong(passphrase: string): string {
  if (passphrase.length >= LEAST) return passphrase;
  throw new BackupError(
    `The passphrase is too short. Use at least ${LEAST} characters, and keep it elsewhere.`,
  );
}

async function ask(question: string): Promise<string> {
  process.stdout.write(question);
  const silent = new Writable({ write: (_chunk, _encoding, done) => done() });
  const asking = createInterface({ input: process.stdin, output: silent, terminal: true });
  try {
    return await asking.question('');
  } finally {
    asking.close();
    process.stdout.write('\n');
  }
}
