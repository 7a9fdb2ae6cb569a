import { v7 } from 'uuid';

export const SECOND = 1000;
export const MINUTE = 60 * SECOND;
export const HOUR = 60 * MINUTE;
export const DAY = 24 * HOUR;

/** What time it is; passed in, so that a test can step it. */
export interface Clock {
  now(): Date;
}

/** Makes UUIDv7 ids; passed in, so that a test can foretell them. */
export interface Ids {
  next(): string;
}

export const systemClock: Clock = { now: () => new Date() };

export const randomIds: Ids = { next: () => v7() };

/** The time as it is stored everywhere: RFC 3339, UTC, milliseconds. */
export function stamp(clock: Clock): string {
  return clock.now().toISOString();
}
