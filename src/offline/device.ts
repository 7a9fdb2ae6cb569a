/*
 * Which tablet this browser is. Its id is in every entry made here, so it never changes while the workshop
 * knows it; the credential authenticates what is sent, for anybody's entries and without a session.
 */
import type { FloorDatabase } from './database';
import type { Surroundings } from './surroundings';

export interface Device {
  id: string;
  name?: string | undefined;
  /** Given out once on enrolment. */
  credential?: string | undefined;
  /** The server no longer knows the credential; the records stay here until it is enrolled again. */
  mustEnrolAgain?: true | undefined;
}

/** The device as this browser keeps it; its id is made on the first call. */
export async function readDevice(s: Pick<Surroundings, 'db' | 'newId'>): Promise<Device> {
  return (await findDevice(s.db)) ?? makeDevice(s);
}

/** In a transaction of its own, so that two tabs opened together agree on one id. */
async function makeDevice(s: Pick<Surroundings, 'db' | 'newId'>): Promise<Device> {
  return s.db.transaction('rw', s.db.meta, async () => {
    const known = await findDevice(s.db);
    if (known) return known;
    const device: Device = { id: s.newId() };
    await keepDevice(s.db, device);
    return device;
  });
}

/** The device, or undefined before its first use. */
export async function findDevice(db: FloorDatabase): Promise<Device | undefined> {
  const row = await db.meta.get('device');
  return row?.value as Device | undefined;
}

/** Writes the device down. */
export async function keepDevice(db: FloorDatabase, device: Device): Promise<void> {
  await db.meta.put({ key: 'device', value: device });
}

/** `id.credential` as the server asks for it, or undefined while the tablet is not enrolled. */
export function credentialOf({ id, credential }: Device): string | undefined {
  return credential === undefined ? undefined : `${id}.${credential}`;
}

/** Notes that the server no longer knows this credential, unless there is a newer one by now. */
export async function noteForgotten(db: FloorDatabase, { credential }: Device): Promise<void> {
  await db.transaction('rw', db.meta, async () => {
    const present = await findDevice(db);
    if (present && present.credential === credential)
      await keepDevice(db, { ...present, mustEnrolAgain: true });
  });
}
