import type { PersonRow } from '@db/tables';
import type { Certificate } from '@/domain/certificate';
import type { Role } from '@/domain/role';
import { type Actor, hasRole, parseRoles, requireRole } from './actor';
import { toAuthorisation } from './authorisations';
import { type Clock, type Ids, stamp } from './clock';
import { LIST_PAGE, pageOf, readCursor } from './cursor';
import type { Db, Trx } from './database';
import { AppError, notFound } from './errors';
import { appendWorkshopEntry } from './workshop-trail';

/** A person of the workshop, as others may see them. */
export interface Person {
  id: string;
  name: string;
  roles: Role[];
  active: boolean;
  hasPin: boolean;
  /** Only for the owner and the person: contact data goes nowhere else. */
  email?: string | undefined;
  /** Whether the trails hold anything under this name; if so, it stays as it is printed there. */
  hasSigned: boolean;
  hasPassword: boolean;
  createdAt: string;
  deactivatedAt: string | null;
  certificate: Certificate | null;
  /** The last day on which their signature counts; null where no end is set. */
  authorisedUntil: string | null;
}

interface Making {
  clock: Clock;
  ids: Ids;
}

export interface NewPerson {
  name: string;
  email: string;
  roles: readonly Role[];
}

/** Everybody of the workshop, by name, a page at a time; the deactivated too, since their names stand in trails. */
export async function listPeople(
  db: Db,
  actor: Actor,
  { cursor }: { cursor?: string | undefined } = {},
): Promise<{ people: Person[]; cursor?: string }> {
  let query = selectPeople(db)
    .orderBy('person.printed_name')
    .orderBy('person.id')
    .limit(LIST_PAGE + 1);
  const after = readCursor(cursor, 2);
  if (after !== undefined)
    query = query.where((eb) => eb(eb.refTuple('person.printed_name', 'person.id'), '>', eb.tuple(...after)));
  const { rows, ...next } = pageOf(await query.execute(), LIST_PAGE, (row) => [row.printed_name, row.id]);
  return { people: rows.map((row) => toPerson(row, actor)), ...next };
}

/** One person of the workshop. */
export async function getPerson(db: Db, actor: Actor, id: string): Promise<Person> {
  const row = await selectPeople(db).where('person.id', '=', id).executeTakeFirst();
  if (row === undefined) throw notFound('This person');
  return toPerson(row, actor);
}

/** Whether the workshop has anybody yet; without, only the first owner can be made. */
export async function hasPeople(db: Db): Promise<boolean> {
  return (await db.selectFrom('person').select('id').limit(1).executeTakeFirst()) !== undefined;
}

/** Adds a person who has no password yet; give them a one-time link to set it. */
export async function addPerson(trx: Trx, actor: Actor, person: NewPerson, making: Making): Promise<string> {
  requireRole(actor, 'owner');
  const id = making.ids.next();
  await insertPerson(trx, id, person, making.clock);
  await appendWorkshopEntry(
    trx,
    actor,
    { kind: 'person-added', data: { person: id, name: person.name, roles: [...person.roles] } },
    making,
  );
  return id;
}

/** Adds the first owner, who opens the workshop's own trail with their own name. */
export async function addFirstOwner(
  trx: Trx,
  { name, email }: Omit<NewPerson, 'roles'>,
  making: Making,
): Promise<Actor> {
  if (await hasPeople(trx))
    throw new AppError('conflict', 'This workshop has its owner already. Sign in instead.');
  const id = making.ids.next();
  const owner: Actor = { personId: id, name, roles: ['owner'], sessionId: undefined };
  await insertPerson(trx, id, { name, email, roles: owner.roles }, making.clock);
  await appendWorkshopEntry(
    trx,
    owner,
    { kind: 'person-added', data: { person: id, name, roles: [...owner.roles] } },
    making,
  );
  return owner;
}

/** Gives a person other roles. The workshop always keeps an owner. */
export async function changeRoles(
  trx: Trx,
  actor: Actor,
  id: string,
  roles: readonly Role[],
  making: Making,
): Promise<void> {
  requireRole(actor, 'owner');
  const row = await getRow(trx, id);
  const from = parseRoles(row.roles);
  if (from.length === roles.length && from.every((role) => roles.includes(role))) return;
  if (from.includes('owner') && !roles.includes('owner')) await requireOtherOwner(trx, id);
  await trx
    .updateTable('person')
    .set({ roles: JSON.stringify(roles) })
    .where('id', '=', id)
    .execute();
  await appendWorkshopEntry(
    trx,
    actor,
    { kind: 'roles-changed', data: { person: id, from, to: [...roles] } },
    making,
  );
}

/** Corrects the name of a person under whose name nothing is recorded yet; signers keep theirs. */
export async function renamePerson(
  trx: Trx,
  actor: Actor,
  id: string,
  name: string,
  making: Making,
): Promise<void> {
  requireRole(actor, 'owner');
  const row = await getRow(trx, id);
  if (row.printed_name === name) return;
  if (await hasSigned(trx, id)) {
    throw new AppError(
      'conflict',
      `${row.printed_name} has signed under this name, so it stays. If it is another person, add them as themselves.`,
      { field: 'name' },
    );
  }
  await trx.updateTable('person').set({ printed_name: name }).where('id', '=', id).execute();
  await trx
    .updateTable('user')
    .set({ name, updatedAt: stamp(making.clock) })
    .where('id', '=', id)
    .execute();
  await appendWorkshopEntry(
    trx,
    actor,
    { kind: 'person-renamed', data: { person: id, from: row.printed_name, to: name } },
    making,
  );
}

/** Lets a person in or out. Out ends their sessions; what they recorded stays under their name. */
export async function setActive(
  trx: Trx,
  actor: Actor,
  id: string,
  active: boolean,
  making: Making,
): Promise<void> {
  requireRole(actor, 'owner');
  const row = await getRow(trx, id);
  if ((row.active === 1) === active) return;
  if (!active && parseRoles(row.roles).includes('owner')) await requireOtherOwner(trx, id);
  await trx
    .updateTable('person')
    .set({ active: active ? 1 : 0, deactivated_at: active ? null : stamp(making.clock) })
    .where('id', '=', id)
    .execute();
  if (!active) await trx.deleteFrom('session').where('userId', '=', id).execute();
  const kind = active ? 'person-reactivated' : 'person-deactivated';
  await appendWorkshopEntry(trx, actor, { kind, data: { person: id, name: row.printed_name } }, making);
}

async function insertPerson(
  trx: Trx,
  id: string,
  { name, email, roles }: NewPerson,
  clock: Clock,
): Promise<void> {
  const address = email.toLowerCase();
  const taken = await trx.selectFrom('user').select('id').where('email', '=', address).executeTakeFirst();
  if (taken !== undefined) {
    throw new AppError('conflict', 'Somebody with this e-mail address is there already. Use another one.', {
      field: 'email',
    });
  }
  const at = stamp(clock);
  await trx
    .insertInto('user')
    .values({ id, name, email: address, emailVerified: 0, image: null, createdAt: at, updatedAt: at })
    .execute();
  await trx
    .insertInto('person')
    .values({
      id,
      printed_name: name,
      email: address,
      roles: JSON.stringify(roles),
      active: 1,
      created_at: at,
      deactivated_at: null,
      certificate_number: null,
      certificate_kind: null,
      authorised_until: null,
    })
    .execute();
}

async function requireOtherOwner(trx: Trx, id: string): Promise<void> {
  const others = await trx
    .selectFrom('person')
    .select('roles')
    .where('active', '=', 1)
    .where('id', '!=', id)
    .execute();
  if (others.some((other) => parseRoles(other.roles).includes('owner'))) return;
  throw new AppError('conflict', 'This is the only owner. Make somebody else an owner first.', {
    field: 'roles',
  });
}

async function getRow(trx: Trx, id: string): Promise<PersonRow> {
  const row = await trx.selectFrom('person').selectAll().where('id', '=', id).executeTakeFirst();
  if (row === undefined) throw notFound('This person');
  return row;
}

async function hasSigned(db: Db, id: string): Promise<boolean> {
  const row = await selectPeople(db).where('person.id', '=', id).executeTakeFirst();
  return row?.has_signed === 1;
}

function selectPeople(db: Db) {
  return db
    .selectFrom('person')
    .selectAll('person')
    .select((eb) => [
      eb
        .exists(eb.selectFrom('signing_pin').select('person_id').whereRef('person_id', '=', 'person.id'))
        .as('has_pin'),
      eb
        .exists(
          eb
            .selectFrom('account')
            .select('account.id')
            .whereRef('userId', '=', 'person.id')
            .where('password', 'is not', null),
        )
        .as('has_password'),
      eb
        .or([
          eb.exists(eb.selectFrom('job_entry').select('seq').whereRef('by_person', '=', 'person.id')),
          eb.exists(eb.selectFrom('workshop_entry').select('seq').whereRef('by_person', '=', 'person.id')),
        ])
        .as('has_signed'),
    ]);
}

type SelectedPerson = Awaited<ReturnType<ReturnType<typeof selectPeople>['execute']>>[number];

function toPerson(row: SelectedPerson, actor: Actor): Person {
  const mayKnow = hasRole(actor, 'owner') || actor.personId === row.id;
  return {
    id: row.id,
    name: row.printed_name,
    roles: parseRoles(row.roles),
    active: row.active === 1,
    hasPin: Boolean(row.has_pin),
    hasSigned: Boolean(row.has_signed),
    hasPassword: Boolean(row.has_password),
    createdAt: row.created_at,
    deactivatedAt: row.deactivated_at,
    ...toAuthorisation(row),
    ...(mayKnow ? { email: row.email } : {}),
  };
}
