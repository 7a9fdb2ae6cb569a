import { v7 } from 'uuid';
import { openFloorDatabase, type FloorDatabase } from './database';

/** Everything outside the program that the offline part touches, so that a test can stand in for it. */
export interface Surroundings {
  db: FloorDatabase;
  fetch: (path: string, init?: RequestInit) => Promise<Response>;
  /** Milliseconds since 1970. */
  now: () => number;
  /** A UUIDv7. */
  newId: () => string;
  /** 0 to 1. */
  random: () => number;
  subtle: SubtleCrypto;
  /** Absent in a browser without Web Locks: then each tab takes turns only with itself. */
  locks?: LockManager | undefined;
  /** Calls back after a time; the answer cancels it. */
  after: (ms: number, then: () => void) => () => void;
}

/** The browser as it is. */
export function browserSurroundings(): Surroundings {
  return {
    db: openFloorDatabase(),
    fetch: (path, init) => fetch(path, init),
    now: () => Date.now(),
    newId: () => v7(),
    random: () => Math.random(),
    subtle: crypto.subtle,
    locks: 'locks' in navigator ? navigator.locks : undefined,
    after: (ms, then) => {
      const timer = setTimeout(then, ms);
      return () => clearTimeout(timer);
    },
  };
}

/** The time as entries and requests carry it: RFC 3339, UTC, milliseconds. */
export function instantOf(ms: number): string {
  return new Date(ms).toISOString();
}
