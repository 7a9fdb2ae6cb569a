import { type DemoSignIn, demoSignIns } from '@db/seed';
import type { App } from '@/server/compose';
import { firstOwnerLink } from '@/server/one-time-links';

/** What whoever starts the server needs to know: where it is, and how to get in. */
export async function greeting(app: App): Promise<string> {
  const lines = [`Witnessmark is served at ${app.settings.publicUrl}`];
  const ownerLink = await firstOwnerLink(app);
  if (ownerLink !== undefined) {
    lines.push(
      '',
      'Nobody can sign in yet. Make the first owner here, within 24 hours, once:',
      `  ${ownerLink}`,
    );
  } else if (await holdsDemo(app)) {
    lines.push(
      '',
      'Demo sign-ins (invented people, known passwords: not for real work):',
      ...demoSignIns.map(signInLine),
    );
  }
  lines.push('', `Data is kept in ${app.settings.dataDir}. Press Ctrl+C to stop.`);
  return lines.join('\n');
}

async function holdsDemo({ db }: App): Promise<boolean> {
  const [{ email }] = demoSignIns;
  return (
    (await db.selectFrom('user').select('id').where('email', '=', email).executeTakeFirst()) !== undefined
  );
}

function signInLine({ roles, email, password, pin }: DemoSignIn): string {
  return `  ${roles.join(', ').padEnd(14)} ${email.padEnd(34)} password ${password}   PIN ${pin}`;
}
