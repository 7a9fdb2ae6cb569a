/* Tablets for tests: a real database each (closed and opened again at will), a stepped clock, known chance. */
import { webcrypto } from 'node:crypto';
import { expect } from 'vitest';
import type { Entry } from '@/domain/entry';
import { applyEntry, emptyJob } from '@/domain/job';
import { openFloorDatabase } from '@/offline/database';
import { sha256OfBytes } from '@/offline/hashing';
import { closeOffline, openOffline, type Offline } from '@/offline/offline';
import type { PreparedPhoto } from '@/offline/photo';
import { makeAvailableOffline, pullWorkshop } from '@/offline/prefetch';
import { recordEntries, type Draft, type RecordOutcome } from '@/offline/record';
import type { Surroundings } from '@/offline/surroundings';
import { enrolAuthorKey, enrolTablet, rememberSignIn } from '@/offline/tablet';
import { Journal } from './journal';
import type { OfflineServer } from './offline-server';
import { smallPlan } from './small-documents';

let tablets = 0;

/** One browser that keeps what it has on its disk over any number of openings. */
export class TestTablet {
  readonly name: string;
  now: number;
  timers: { ms: number; then: () => void }[] = [];
  private ids = 0;

  constructor(readonly server: OfflineServer) {
    tablets += 1;
    this.name = `tablet-${tablets}`;
    this.now = server.clock;
  }

  /** Opens the page; nothing is sent by itself. */
  open(over: Partial<Surroundings> = {}): Offline {
    return openOffline({
      db: openFloorDatabase(this.name),
      fetch: this.server.fetch,
      now: () => this.now,
      newId: () => this.newId(),
      random: () => 0.5,
      subtle: webcrypto.subtle as SubtleCrypto,
      locks: undefined,
      after: (ms, then) => {
        const timer = { ms, then };
        this.timers.push(timer);
        return () => {
          this.timers = this.timers.filter((one) => one !== timer);
        };
      },
      ...over,
    });
  }

  private newId(): string {
    this.ids += 1;
    const number = Number(this.name.slice(7));
    return `0190a0a0-0000-7000-8${String(number).padStart(3, '0')}-${String(this.ids).padStart(12, '0')}`;
  }
}

/** An enrolled tablet with these people signed in and, if given, a job made available on it. */
export async function openTablet(
  server: OfflineServer,
  { people = ['tech'], job }: { people?: string[]; job?: string | undefined } = {},
): Promise<{ tablet: TestTablet; offline: Offline }> {
  const tablet = new TestTablet(server);
  const offline = tablet.open();
  server.session = people[0];
  must(await enrolTablet(offline, tablet.name));
  must(await pullWorkshop(offline));
  for (const person of people) await signIn(offline, server, person);
  if (job !== undefined) must(await makeAvailableOffline(offline, job));
  return { tablet, offline };
}

/** Somebody signs in at this tablet, beside whoever else is. */
export async function signIn(offline: Offline, server: OfflineServer, person: string): Promise<void> {
  const found = server.workshop.people.find(({ id }) => id === person)!;
  server.session = person;
  await rememberSignIn(offline, {
    person,
    name: found.name,
    roles: found.roles,
    sessionUntil: new Date(offline.now() + 12 * 3_600_000).toISOString(),
  });
  must(await enrolAuthorKey(offline, person));
}

/** The tablet is switched off in the middle and on again: the page is gone, the disk is not. */
export function killAndReopen(tablet: TestTablet, offline: Offline): Offline {
  closeOffline(offline);
  return tablet.open();
}

/** What a technician does first on the small plan's job, as drafts; `count` of them. */
export function firstWork(count: number): Draft[] {
  const journal = new Journal(smallPlan()).performUntil('strip.turn-to@stop2');
  const drafts = journal.entries
    .slice(1)
    .map(({ kind, step, data }: Entry) =>
      kind === 'photographed' ? photographed(picture(step ?? '')) : ({ kind, step, data } as Draft),
    );
  if (drafts.length < count) throw new Error(`There are only ${drafts.length} first things to do.`);
  return drafts.slice(0, count);
}

/** A picture as the camera's button leaves it; its bytes are the text. */
export function picture(text: string): PreparedPhoto {
  const bytes = new TextEncoder().encode(text);
  return { hash: sha256OfBytes(bytes), bytes: bytes.buffer, type: 'image/jpeg', width: 4, height: 3 };
}

/** The record of a picture taken on the small plan's arrival. */
export function photographed({ hash, bytes, type }: PreparedPhoto): Draft {
  return {
    kind: 'photographed',
    step: 'strip.arrival',
    data: { photo: hash, bytes: bytes.byteLength, type, subject: 'arrival', from: 'camera here' },
  };
}

/** A remark: what anybody can record at any time. */
export function remark(words: string): Draft {
  return { kind: 'deviation-raised', data: { class: 'C', words, blocks: false } };
}

/** Records drafts one after the other, five seconds apart; each must be taken. */
export async function recordAll(
  { tablet, offline }: { tablet: TestTablet; offline: Offline },
  job: string,
  drafts: readonly Draft[],
  by = 'tech',
): Promise<Entry[]> {
  const entries: Entry[] = [];
  for (const draft of drafts) {
    tablet.now += 5000;
    const photos = draft.kind === 'photographed' ? [picture(draft.step ?? '')] : [];
    const outcome = await recordEntries(offline, job, [draft], { by, photos });
    entries.push(...recorded(outcome));
  }
  return entries;
}

/** Records so many remarks, numbered from one given. */
export function recordRemarks(
  at: { tablet: TestTablet; offline: Offline },
  job: string,
  { from = 1, count, by = 'tech' }: { from?: number; count: number; by?: string },
): Promise<Entry[]> {
  const drafts = Array.from({ length: count }, (_, n) => remark(`no. ${from + n}`));
  return recordAll(at, job, drafts, by);
}

/** The ids of what the server holds of a job that did not come from the office. */
export function idsFromTablets(server: OfflineServer, job: string): string[] {
  return server
    .entriesOf(job)
    .filter(({ device }) => device !== 'office')
    .map(({ id }) => id);
}

/** What must hold after all went through: one chain here, the same as the server's, and nothing left over. */
export async function expectAllArrived(
  { server, offline }: { server: OfflineServer; offline: Offline },
  job: string,
  made: readonly { id: string }[],
): Promise<void> {
  expect(idsFromTablets(server, job)).toEqual(made.map(({ id }) => id));
  const rows = await offline.db.entries.orderBy(':id').toArray();
  expect(rows.map(({ hash }) => hash)).toEqual(server.jobs.get(job)!.rows.map(({ hash }) => hash));
  expect(await offline.db.outbox.count()).toBe(0);
  const view = await offline.jobs.refresh(job);
  expect(view.row.have).toEqual({ seq: rows.length, hash: rows.at(-1)!.hash });
  expect(view.state).toEqual(rows.map((row) => row.recorded).reduce(applyEntry, emptyJob(smallPlan())));
}

/** The entries of a record that must have been taken. */
export function recorded(outcome: RecordOutcome): Entry[] {
  if (!outcome.ok) throw new Error(`Not recorded: ${outcome.why} (${outcome.code})`);
  return outcome.entries;
}

/** Throws what went wrong. */
export function must(outcome: { ok: true } | { ok: false; code: string; why: string }): void {
  if (!outcome.ok) throw new Error(`${outcome.why} (${outcome.code})`);
}
