/* One run: a seed, three tablets, a server, and what was told to whom. */
import { rmSync } from 'node:fs';
import { judgementKinds, type Entry } from '@/domain/entry';
import type { FloorDatabase, MetaRow } from '@/offline/database';
import type { Device } from '@/offline/device';
import { contentHashOf } from '@/offline/hashing';
import { recordEntries } from '@/offline/record';
import { openDisk, watchQuota, writeRows, type Rows } from './disk';
import { Network, type Call } from './network';
import { thinkOf, type Deed } from './people';
import { Chance, countingIdsOf } from './seed';
import { openServer, type Reply, type SimServer } from './server';
import { SimTablet, type Around, type Tab } from './tablet';
import { Turns } from './turns';
import { copyFolder, theBeginning, type Beginning, type Name } from './workshop';

/** Something that must hold did not. */
export class Breach extends Error {
  override name = 'Breach';
}

/** A record that a screen said to be on this tablet. */
export interface Told {
  entry: Entry;
  contentHash: string;
  tablets: Set<SimTablet>;
}

interface Verdict {
  id: string;
  verdict: 'recorded' | 'already recorded' | 'refused' | 'waiting';
  code?: string;
}

export class Run {
  readonly log: string[] = [];
  readonly told = new Map<string, Told>();
  /** What the server last said for good about an id, and after which restore. */
  readonly verdicts = new Map<string, { isRecorded: boolean; restores: number }>();
  jobs: string[] = [];
  tablets: SimTablet[] = [];
  /** Tablets that nobody will see again. */
  lost: SimTablet[] = [];
  away = new Set<Name>();
  restores = 0;
  /** What tablets had as refused when the server was restored. */
  readonly refusedBefore = new Set<string>();
  hasCopy = false;

  private constructor(
    readonly seed: number,
    readonly chance: Chance,
    readonly turns: Turns,
    readonly beginning: Beginning,
    readonly clock: { now: number },
    readonly server: SimServer,
    readonly network: Network,
    /** What went wrong where nobody could throw it. */
    readonly breaches: string[],
    private readonly end: () => Promise<void>,
  ) {}

  /** Sets a run up; `close` it whatever comes. */
  static async open(seed: number): Promise<Run> {
    const beginning = await theBeginning();
    const chance = new Chance(seed);
    const turns = new Turns();
    const clock = { now: beginning.now };
    const folder = copyFolder(beginning);
    const breaches: string[] = [];
    const server = await openServer({
      folder,
      now: () => clock.now,
      newId: countingIdsOf(10),
      onError: (line) => breaches.push(`The server logged an error: ${line}`),
    });
    const heard: { run?: Run } = {};
    const network = new Network(
      server,
      (work) => turns.outside(work),
      (call, reply) => heard.run?.hear(call, reply),
    );
    const endQuota = watchQuota();
    const onRejection = (reason: unknown) =>
      breaches.push(`A rejection that nobody took care of: ${wordsOf(reason)}`);
    process.on('unhandledRejection', onRejection);
    const endHush = hearWarnings((words) => breaches.push(`A warning: ${words}`));
    turns.install();
    const run = new Run(seed, chance, turns, beginning, clock, server, network, breaches, async () => {
      turns.remove();
      endQuota();
      process.off('unhandledRejection', onRejection);
      endHush();
      await server.close();
      rmSync(folder, { recursive: true, force: true });
    });
    heard.run = run;
    return run;
  }

  /** Writes down what happened. */
  note(words: string): void {
    this.log.push(`${new Date(this.clock.now).toISOString().slice(5, 19)} ${words}`);
  }

  /** Adds a tablet with these rows on its disk, and opens a page on it. */
  async addTablet(rows: Rows, jobs: readonly string[], hasLocks: boolean): Promise<SimTablet> {
    const number = this.tablets.length + this.lost.length + 1;
    const around: Around = {
      chance: this.chance,
      turns: this.turns,
      network: this.network,
      now: () => this.clock.now,
      newId: countingIdsOf(20 + number),
    };
    const disk = `run-${process.pid}-${this.seed}-${number}`;
    const tablet = new SimTablet(around, number, deviceIn(rows), jobs, disk, hasLocks);
    await this.onDisk(tablet, (db) => writeRows(db, rows));
    this.tablets.push(tablet);
    tablet.openTab();
    return tablet;
  }

  /** Reads or writes a tablet's records past its pages, once these are at rest. */
  async onDisk<T>(tablet: SimTablet, work: (db: FloorDatabase) => Promise<T>): Promise<T> {
    await this.turns.rest();
    const db = openDisk(tablet.disk, tablet.schema);
    const result = await this.finish(work(db));
    db.close();
    return result;
  }

  /** Takes turns until a promise has come to its end; the network is at its best meanwhile, if it is to help. */
  async finish<T>(work: Promise<T>, { network = false } = {}): Promise<T> {
    const end = { isThere: false };
    const note = () => {
      end.isThere = true;
    };
    work.then(note, note);
    await this.turns.rest();
    while (!end.isThere) {
      if (!network || !(await this.moveNetwork())) throw new Breach('Something waits for what never comes.');
      await this.turns.rest();
    }
    return work;
  }

  private async moveNetwork(): Promise<boolean> {
    const [back] = this.network.back;
    const [there] = this.network.there;
    if (back) this.network.bringBack(back);
    else if (there) await this.network.arrive(there);
    return back !== undefined || there !== undefined;
  }

  /** Somebody does something at a page; it ends when it ends. */
  act(tab: Tab): void {
    tab.isBusy = true;
    this.actOn(tab)
      .catch((error: unknown) => this.hearFailure(tab, error))
      .finally(() => {
        tab.isBusy = false;
      });
  }

  private async actOn(tab: Tab): Promise<void> {
    const { offline, tablet } = tab;
    const chance = new Chance(this.chance.between(0, 0x7fffffff));
    const job = chance.pick(tablet.jobs);
    const view = offline.jobs.get(job) ?? (await offline.jobs.open(job));
    const workshop = await offline.db.workshop.get('workshop');
    const kit = { ...this.beginning.kit, ...(workshop ? { workshop } : {}) };
    const deed = await thinkOf({
      ...{ chance, offline, view, kit, beginning: this.beginning },
      hasNewcomer: tablet.hasNewcomer,
    });
    if (!deed) return;
    const { drafts, by, photos } = deed;
    const outcome = await recordEntries(offline, job, drafts, { by: by.id, photos });
    if (tab.isDead) return;
    const what = wordsOfDeed(deed);
    if (!outcome.ok) {
      this.note(`${tablet.name}: ${what} is not allowed (${outcome.code})`);
      return;
    }
    for (const entry of outcome.entries) {
      this.told.set(entry.id, { entry, contentHash: contentHashOf(entry), tablets: new Set([tablet]) });
    }
    const numbers = outcome.entries.map(({ deviceSeq, id }) => `${deviceSeq} (${id.slice(-14)})`);
    this.note(`${tablet.name}: ${what} is on this tablet as number ${numbers.join(', ')}`);
  }

  /** A full disk, a page closed under somebody's hand: they are told, and nothing is said to be recorded. */
  hearFailure(tab: Tab, error: unknown): void {
    if (tab.isDead) return;
    const words = wordsOf(error);
    const isExpected = EXPECTED.some((one) => words.includes(one));
    this.note(`${tab.tablet.name}: what was to be recorded failed: ${words.slice(0, 120)}`);
    if (!isExpected) this.breaches.push(`Recording failed on ${tab.tablet.name}: ${words}`);
  }

  /** Listens to what the server says of each record. */
  private hear(call: Call, { status, text }: Reply): void {
    if (status >= 500) this.breaches.push(`The server answered ${status} to ${call.path}: ${text}`);
    if (call.path !== '/api/sync' || status !== 200) return;
    const { verdicts } = JSON.parse(text) as { verdicts: Verdict[] };
    for (const verdict of verdicts) this.hearVerdict(call, verdict);
  }

  /** Listens to what the server says of a tablet's file. */
  hearFile(from: string, { text }: Reply): void {
    const { verdicts } = JSON.parse(text) as { verdicts: Verdict[] };
    for (const verdict of verdicts) this.hearVerdict({ from }, verdict);
  }

  private hearVerdict(call: Pick<Call, 'from'>, { id, verdict, code }: Verdict): void {
    this.note(`server to ${call.from}: ${id.slice(-14)} ${verdict}${code === undefined ? '' : ` (${code})`}`);
    if (code === 'unexpected') this.breaches.push(`The server could not judge the record ${id}.`);
    if (verdict === 'waiting') return;
    const isRecorded = verdict !== 'refused';
    const before = this.verdicts.get(id);
    if (before && before.isRecorded !== isRecorded && before.restores === this.restores)
      this.breaches.push(`The verdict on ${id} changed: it is ${verdict} now.`);
    if (isRecorded && this.refusedBefore.has(id) && !this.hasCopy)
      this.breaches.push(`${id} was told as refused, and is recorded after the restore.`);
    const kind = this.told.get(id)?.entry.kind;
    if (before?.isRecorded && !isRecorded && kind && !(judgementKinds as readonly string[]).includes(kind))
      this.breaches.push(`${id} (${kind}) had been recorded, and was refused after the restore.`);
    this.verdicts.set(id, { isRecorded, restores: this.restores });
  }

  /** Who the server says is not active. */
  async readAway(): Promise<Name[]> {
    const rows = await this.server.app.db.selectFrom('person').select('id').where('active', '=', 0).execute();
    const gone = new Set(rows.map(({ id }) => id));
    const names = Object.keys(this.beginning.people) as Name[];
    return names.filter((name) => gone.has(this.beginning.people[name].id));
  }

  /** The tablet with this device id, the first if it was copied. */
  tabletOf(device: string): SimTablet | undefined {
    return [...this.tablets, ...this.lost].find((tablet) => tablet.device === device);
  }

  isCopied(device: string): boolean {
    return [...this.tablets, ...this.lost].filter((tablet) => tablet.device === device).length > 1;
  }

  /** Throws the first thing that went wrong. */
  complain(): void {
    const [first] = this.breaches;
    if (first !== undefined) throw new Breach(first);
  }

  async close(): Promise<void> {
    const tablets = [...this.tablets, ...this.lost];
    for (const tablet of tablets) {
      tablet.fill(false);
      for (const tab of [...tablet.tabs]) tab.kill(true);
    }
    await this.turns.take(5000);
    await this.end();
    for (const tablet of tablets) indexedDB.deleteDatabase(tablet.disk);
  }
}

/** What a page may be told when its disk is full, or when its records were closed under it. */
const EXPECTED = ['QuotaExceededError', 'DatabaseClosedError', 'no longer on this tablet'];

/** Dexie warns where a page is closed out of its records by a newer one, which here is meant. */
function hearWarnings(tell: (words: string) => void): () => void {
  const { warn } = console;
  console.warn = (...words: unknown[]) => {
    const text = words.map(String).join(' ');
    if (!text.startsWith('Another connection wants to')) tell(text);
  };
  return () => (console.warn = warn);
}

function deviceIn(rows: Rows): string {
  const meta = rows.get('meta') as MetaRow[];
  return (meta.find(({ key }) => key === 'device')?.value as Device).id;
}

function wordsOfDeed({ drafts, by }: Deed): string {
  return `${by.name}’s ${drafts.map(({ kind, step }) => `${kind}${step ? ` on ${step}` : ''}`).join(' and ')}`;
}

export function wordsOf(reason: unknown): string {
  return reason instanceof Error
    ? `${reason.name}: ${reason.message}\n${reason.stack ?? ''}`
    : String(reason);
}
