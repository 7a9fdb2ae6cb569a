import type { Role } from '@/domain/role';
import type { SecondUnits } from '@/domain/second-unit';
import type { Certificate } from '@/domain/certificate';
import { dayIn } from '@/domain/time-words';
import { type Actor, parseRoles, requireRole } from './actor';
import { type Asker, requireSomebody } from './asker';
import { type Clock, type Ids, stamp } from './clock';
import type { Db, Trx } from './database';
import type { Keys } from './keys';
import { toAuthorisation } from './authorisations';
import { readSecondUnits } from './second-units';
import { type KeptTool, readTools } from './tool-rows';
import { appendWorkshopEntry, findLastRestore, workshopSeq } from './workshop-trail';

export interface WorkshopDetails {
  name: string;
  /** The zone that times are shown in and due dates are judged in, such as `Europe/London`. */
  zone: string;
}

/** What tablets and pages need of the workshop to judge by: no contact data, no secrets. */
export interface WorkshopView extends WorkshopDetails {
  /** The number of the workshop's newest entry, by which all of this holds. */
  seq: number;
  /** When the server was last restored: another restore takes back what this number means. */
  restoredAt: string | null;
  people: {
    id: string;
    name: string;
    roles: Role[];
    active: boolean;
    hasPin: boolean;
    certificate: Certificate | null;
    authorisedUntil: string | null;
  }[];
  tools: KeptTool[];
  /** The key that PINs are sealed to. */
  sealingKey: { id: string; publicKey: string };
  /** The fingerprint of the key that signs trail heads. */
  headKey: string;
  /** What stands beside SI on the Floor. */
  secondUnits: SecondUnits;
}

/** Names the workshop and its zone. */
export async function setWorkshop(
  trx: Trx,
  actor: Actor,
  { name, zone }: WorkshopDetails,
  app: { clock: Clock; ids: Ids },
): Promise<void> {
  requireRole(actor, 'owner');
  for (const [key, value] of Object.entries({ 'workshop.name': name, 'workshop.zone': zone })) {
    await trx
      .insertInto('setting')
      .values({ key, value })
      .onConflict((conflict) => conflict.column('key').doUpdateSet({ value }))
      .execute();
  }
  await appendWorkshopEntry(trx, actor, { kind: 'workshop-set', data: { name, zone } }, app);
}

/** The workshop's name and zone. */
export async function getWorkshopDetails(db: Db): Promise<WorkshopDetails> {
  const rows = await db
    .selectFrom('setting')
    .selectAll()
    .where('key', 'in', ['workshop.name', 'workshop.zone'])
    .execute();
  const values = new Map(rows.map((row) => [row.key, row.value]));
  return { name: values.get('workshop.name') ?? 'Workshop', zone: values.get('workshop.zone') ?? 'UTC' };
}

/** The day that it is in the workshop's zone, YYYY-MM-DD: due dates are judged by it. */
export async function readToday(db: Db, clock: Clock): Promise<string> {
  const { zone } = await getWorkshopDetails(db);
  return dayIn(zone, stamp(clock));
}

/** The workshop as tablets and pages judge by it; read in one transaction, so that `seq` fits the rest. */
export async function getWorkshopView(db: Db, asker: Asker, keys: Keys): Promise<WorkshopView> {
  return db.isTransaction
    ? readView(db, asker, keys)
    : db.transaction().execute((trx) => readView(trx, asker, keys));
}

async function readView(db: Db, asker: Asker, keys: Keys): Promise<WorkshopView> {
  requireSomebody(asker);
  const people = await db
    .selectFrom('person')
    .leftJoin('signing_pin', 'signing_pin.person_id', 'person.id')
    .selectAll('person')
    .select('signing_pin.set_at')
    .orderBy('printed_name')
    .execute();
  return {
    ...(await getWorkshopDetails(db)),
    seq: await workshopSeq(db),
    restoredAt: (await findLastRestore(db)) ?? null,
    people: people.map((row) => ({
      id: row.id,
      name: row.printed_name,
      roles: parseRoles(row.roles),
      active: row.active === 1,
      hasPin: row.set_at !== null,
      ...toAuthorisation(row),
    })),
    tools: await readTools(db, asker),
    sealingKey: { id: keys.sealing.current.id, publicKey: keys.sealing.current.publicKey },
    headKey: keys.head.fingerprint,
    secondUnits: await readSecondUnits(db),
  };
}
