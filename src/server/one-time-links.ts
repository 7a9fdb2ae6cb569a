import { type Actor, requireRole } from './actor';
import { type Clock, DAY, HOUR, type Ids, stamp } from './clock';
import { forgetAttempts, signInAttempts } from './attempts';
import { newSecret, sha256Hex } from './crypto';
import type { App } from './compose';
import type { Db, Trx } from './database';
import { AppError, notFound } from './errors';
import { hashNewPassword, storePassword } from './passwords';
import { addFirstOwner, hasPeople } from './people';
import { setWorkshop } from './workshop';

const FIRST_OWNER_VALID_MS = 24 * HOUR;
const SET_PASSWORD_VALID_MS = 3 * DAY;

type Purpose = 'first owner' | 'set password';

/** A link to make the first owner, for the person who started the server; undefined once there are people. */
export async function firstOwnerLink(app: App): Promise<string | undefined> {
  return app.db.transaction().execute(async (trx) => {
    if (await hasPeople(trx)) return undefined;
    const expired = { expires_at: stamp(app.clock) };
    // Each start prints its own link; one that scrolled away, or was seen by others, is worth nothing.
    await trx
      .updateTable('one_time_link')
      .set(expired)
      .where('purpose', '=', 'first owner')
      .where('used_at', 'is', null)
      .execute();
    const token = await makeLink(trx, 'first owner', null, FIRST_OWNER_VALID_MS, app.clock);
    return `${app.settings.publicUrl}/first-owner?token=${token}`;
  });
}

/** A link by which a person sets their password, once, within three days. */
export async function makePasswordLink(
  trx: Trx,
  actor: Actor,
  personId: string,
  app: { clock: Clock; settings: { publicUrl: string } },
): Promise<{ link: string; expiresAt: string }> {
  requireRole(actor, 'owner');
  const person = await trx
    .selectFrom('person')
    .select('active')
    .where('id', '=', personId)
    .executeTakeFirst();
  if (person === undefined) throw notFound('This person');
  if (person.active !== 1)
    throw new AppError('conflict', 'This person is deactivated. Take them back first.');
  await trx
    .updateTable('one_time_link')
    .set({ expires_at: stamp(app.clock) })
    .where('person_id', '=', personId)
    .where('used_at', 'is', null)
    .execute();
  const token = await makeLink(trx, 'set password', personId, SET_PASSWORD_VALID_MS, app.clock);
  const expiresAt = new Date(app.clock.now().getTime() + SET_PASSWORD_VALID_MS).toISOString();
  return { link: `${app.settings.publicUrl}/set-password?token=${token}`, expiresAt };
}

/** Whether a link could still be used, for the page that it opens. */
export async function isLinkOpen(db: Db, purpose: Purpose, token: string, clock: Clock): Promise<boolean> {
  return (await findLink(db, purpose, token, clock)) !== undefined;
}

/** Makes the first owner and the workshop through the link that was printed at the start. */
export async function makeFirstOwner(
  app: App,
  input: {
    token: string;
    name: string;
    email: string;
    password: string;
    workshop: { name: string; zone: string };
  },
): Promise<void> {
  await requireLink(app.db, 'first owner', input.token, app.clock);
  const hash = await hashNewPassword(input.password);
  await app.db.transaction().execute(async (trx) => {
    await useLink(trx, 'first owner', input.token, app.clock);
    const owner = await addFirstOwner(trx, input, app);
    await storePassword(trx, owner.personId, hash, app);
    await setWorkshop(trx, owner, input.workshop, app);
  });
}

/** Sets a person's password through their link and ends their sessions elsewhere. */
export async function setPasswordByLink(
  app: { db: Db; clock: Clock; ids: Ids },
  { token, password }: { token: string; password: string },
): Promise<void> {
  await requireLink(app.db, 'set password', token, app.clock);
  const hash = await hashNewPassword(password);
  await app.db.transaction().execute(async (trx) => {
    const link = await useLink(trx, 'set password', token, app.clock);
    const person = await trx
      .selectFrom('person')
      .select(['active', 'email'])
      .where('id', '=', link.person_id ?? '')
      .executeTakeFirst();
    if (person?.active !== 1 || link.person_id === null) throw usedUp();
    await storePassword(trx, link.person_id, hash, app);
    await forgetAttempts(trx, signInAttempts(person.email));
  });
}

async function makeLink(
  trx: Trx,
  purpose: Purpose,
  personId: string | null,
  validMs: number,
  clock: Clock,
): Promise<string> {
  const token = newSecret();
  await trx
    .insertInto('one_time_link')
    .values({
      token_hash: sha256Hex(token),
      purpose,
      person_id: personId,
      created_at: stamp(clock),
      expires_at: new Date(clock.now().getTime() + validMs).toISOString(),
      used_at: null,
    })
    .execute();
  return token;
}

async function useLink(trx: Trx, purpose: Purpose, token: string, clock: Clock) {
  const link = await requireLink(trx, purpose, token, clock);
  await trx
    .updateTable('one_time_link')
    .set({ used_at: stamp(clock) })
    .where('token_hash', '=', link.token_hash)
    .execute();
  return link;
}

async function requireLink(db: Db, purpose: Purpose, token: string, clock: Clock) {
  const link = await findLink(db, purpose, token, clock);
  if (link === undefined) throw usedUp();
  return link;
}

function findLink(db: Db, purpose: Purpose, token: string, clock: Clock) {
  return db
    .selectFrom('one_time_link')
    .selectAll()
    .where('token_hash', '=', sha256Hex(token))
    .where('purpose', '=', purpose)
    .where('used_at', 'is', null)
    .where('expires_at', '>', stamp(clock))
    .executeTakeFirst();
}

function usedUp(): AppError {
  return new AppError(
    'link-used-up',
    'This link was used already or has run out. Ask the owner for a new one; for the first owner, start the server again.',
    { field: 'token' },
  );
}
