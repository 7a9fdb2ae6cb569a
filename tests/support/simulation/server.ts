/* The real server of a run: the exported handlers over a real SQLite file, restarted and restored at will. */
import { copyFileSync, existsSync, rmSync } from 'node:fs';
import path from 'node:path';
import { sql } from 'kysely';
import pino from 'pino';
import * as z from 'zod';
import { POST as postDevices } from '@/pages/api/devices/index';
import { GET as getFloorJobs } from '@/pages/api/floor/jobs';
import { POST as postKeys } from '@/pages/api/keys/index';
import { GET as getMe } from '@/pages/api/me/index';
import { PUT as putPhoto } from '@/pages/api/photos/[hash]';
import { GET as getPlan } from '@/pages/api/plans/[hash]';
import { POST as postSync } from '@/pages/api/sync/index';
import { GET as getWorkshop } from '@/pages/api/workshop/index';
import { type Actor, THE_WORKSHOP } from '@/server/actor';
import { type App, closeApp, openApp, provideApp } from '@/server/compose';
import { changeDevice } from '@/server/device-changes';
import type { HandlerContext } from '@/server/http';
import { setActive } from '@/server/people';
import { SYNC_ENTRIES } from '@/server/sync-body';
import { bringInFile, tabletFileBody } from '@/server/tablet-file';
import { appendWorkshopEntry } from '@/server/workshop-trail';

/** What a tablet saves: its photographs beside what the office sends on. */
const tabletFile = z.looseObject(tabletFileBody.shape);

type Handler = (context: HandlerContext) => Promise<Response>;

const ROUTES: readonly [pattern: RegExp, handlers: Record<string, Handler>][] = [
  [/^\/api\/devices$/, { POST: postDevices }],
  [/^\/api\/keys$/, { POST: postKeys }],
  [/^\/api\/me$/, { GET: getMe }],
  [/^\/api\/workshop$/, { GET: getWorkshop }],
  [/^\/api\/floor\/jobs$/, { GET: getFloorJobs }],
  [/^\/api\/plans\/(?<hash>\w+)$/, { GET: getPlan }],
  [/^\/api\/photos\/(?<hash>\w+)$/, { PUT: putPhoto }],
  [/^\/api\/sync$/, { POST: postSync }],
];

/** What came back, kept as text, so that it can be cut or given twice. */
export interface Reply {
  status: number;
  text: string;
  type: string;
}

export interface SimServer {
  readonly app: App;
  /** Answers a request as one whole; `session` is who is signed in at the browser that asks. */
  answer(path: string, init: RequestInit, session: Actor | undefined): Promise<Reply>;
  /** Copies the database as it stands. */
  backUp(): Promise<void>;
  hasBackup(): boolean;
  /** Puts the database back to the last copy, and says so in the workshop's trail as the command does. */
  restore(): Promise<void>;
  /** The process ends and begins anew: whatever it remembered is gone. */
  restart(): Promise<void>;
  setActive(owner: Actor, person: string, isActive: boolean): Promise<void>;
  /** The office declares a tablet lost. */
  declareLost(owner: Actor, device: string): Promise<void>;
  /** The office brings a tablet's file in, in parts no larger than a push; gives what the server said. */
  bringIn(actor: Actor, file: string): Promise<Reply[]>;
  close(): Promise<void>;
}

interface Parts {
  folder: string;
  now: () => number;
  newId: () => string;
  /** Called with what the server logs as an error; there is to be none. */
  onError: (line: string) => void;
}

/** Opens a data folder as the server of this process. */
export async function openServer({ folder, now, newId, onError }: Parts): Promise<SimServer> {
  const file = path.join(folder, 'witnessmark.db');
  const copy = path.join(folder, 'backup.db');
  const log = pino({ level: 'error' }, { write: onError });
  const parts = { clock: { now: () => new Date(now()) }, ids: { next: newId }, log };
  let backedUpAt = '';

  async function open(): Promise<App> {
    const app = await openApp({ dataDir: folder, publicUrl: 'http://localhost:4321', demo: false }, parts);
    // The machine itself does not stop in a run: only then would it matter when a write reaches the disk.
    await sql`pragma synchronous = OFF`.execute(app.db);
    provideApp(app);
    return app;
  }

  let app = await open();
  return {
    get app() {
      return app;
    },
    async answer(address, init, session) {
      const method = init.method ?? 'GET';
      for (const [pattern, handlers] of ROUTES) {
        const match = pattern.exec(address);
        const handler = handlers[method];
        if (!match || !handler) continue;
        const request = new Request(`http://localhost:4321${address}`, init);
        const response = await handler({ request, params: { ...match.groups }, locals: { actor: session } });
        const type = response.headers.get('content-type') ?? '';
        return { status: response.status, text: await response.text(), type };
      }
      throw new Error(`No handler for ${method} ${address}`);
    },
    async backUp() {
      rmSync(copy, { force: true });
      await sql`vacuum into ${copy}`.execute(app.db);
      backedUpAt = new Date(now()).toISOString();
    },
    hasBackup: () => existsSync(copy),
    async restore() {
      await closeApp(app);
      for (const end of ['-wal', '-shm']) rmSync(`${file}${end}`, { force: true });
      copyFileSync(copy, file);
      app = await open();
      const data = { backupMadeAt: backedUpAt, breaks: 0 };
      await app.db
        .transaction()
        .execute((trx) => appendWorkshopEntry(trx, THE_WORKSHOP, { kind: 'restored', data }, app));
    },
    async restart() {
      await closeApp(app);
      app = await open();
    },
    async setActive(owner, person, isActive) {
      await app.db.transaction().execute((trx) => setActive(trx, owner, person, isActive, app));
    },
    async declareLost(owner, device) {
      await changeDevice(app, owner, device, { state: 'lost', reason: 'Nobody has seen it.' });
    },
    async bringIn(actor, file) {
      const { v, format, tablet, savedAt, clockOffsetMs, entries } = tabletFile.parse(JSON.parse(file));
      const replies: Reply[] = [];
      for (let first = 0; first < entries.length; first += SYNC_ENTRIES) {
        const part = entries.slice(first, first + SYNC_ENTRIES);
        const body = tabletFileBody.parse({ v, format, tablet, savedAt, clockOffsetMs, entries: part });
        const answer = await bringInFile(app, actor, body);
        replies.push({ status: 200, text: JSON.stringify(answer), type: 'application/json' });
      }
      return replies;
    },
    async close() {
      provideApp(undefined);
      await closeApp(app);
    },
  };
}
