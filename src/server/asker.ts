import { ROLES } from '@/domain/role';
import { type Actor, requireRole } from './actor';
import type { Device } from './devices';

/** On whose behalf something is read: a person, or a tablet by its own credential while nobody is signed in. */
export type Asker = Actor | Device;

/** Whether it is a tablet that asks, and no person. */
export function isDevice(asker: Asker): asker is Device {
  return 'enrolledBy' in asker;
}

/** Lets everybody of the workshop go on, whatever their role, and every enrolled tablet; nobody else. */
export function requireSomebody(asker: Asker): void {
  if (!isDevice(asker)) requireRole(asker, ...ROLES);
}
