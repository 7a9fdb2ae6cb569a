/* Simulated tablets: a disk that lasts, pages on it that come and go, and a clock of its own. */
import { webcrypto } from 'node:crypto';
import { closeOffline, openOffline, type Offline } from '@/offline/offline';
import { runSync } from '@/offline/sync-run';
import type { Actor } from '@/server/actor';
import { abortTransactions, openDisk, setFull, type Schema } from './disk';
import type { Network } from './network';
import type { Chance } from './seed';
import type { Turns } from './turns';

/** What of a run a tablet is in touch with. */
export interface Around {
  chance: Chance;
  turns: Turns;
  network: Network;
  /** Milliseconds since 1970, by the server's clock. */
  now: () => number;
  newId: () => string;
}

export class SimTablet {
  schema: Schema = 'present';
  /** The tablet's clock minus the server's. */
  offsetMs = 0;
  isAway = false;
  isFull = false;
  /** Whose session is the active one in this browser. */
  session: Actor | undefined;
  /** Somebody whose first sign-in on any tablet was in this run works here too. */
  hasNewcomer = false;
  tabs: Tab[] = [];
  readonly locks: TabLocks | undefined;

  constructor(
    readonly around: Around,
    readonly number: number,
    /** The id in its entries; a copy has the same. */
    readonly device: string,
    /** The jobs that it holds. */
    readonly jobs: readonly string[],
    readonly disk: string,
    hasLocks: boolean,
  ) {
    this.locks = hasLocks ? new TabLocks(around.turns) : undefined;
  }

  get name(): string {
    return `tablet ${this.number}`;
  }

  now(): number {
    return this.around.now() + this.offsetMs;
  }

  fill(isFull: boolean): void {
    this.isFull = isFull;
    setFull(this.disk, isFull);
  }

  /** Opens the page once more. */
  openTab(): Tab {
    const tab = new Tab(this);
    this.tabs.push(tab);
    tab.start();
    return tab;
  }
}

/** One page. Once it is dead nothing of it reaches anybody, whatever its promises do. */
export class Tab {
  isDead = false;
  /** One finger: what a person does here is done before they do the next thing. */
  isBusy = false;
  timers: { dueAt: number; then: () => void }[] = [];
  readonly offline: Offline;
  private readonly page = new EventTarget();

  constructor(readonly tablet: SimTablet) {
    const { around } = tablet;
    this.offline = openOffline({
      // Loading a module takes no turn, and so has no place in the order of events.
      run: runSync,
      db: openDisk(tablet.disk, tablet.schema),
      fetch: (path, init = {}) => this.fetch(path, init),
      now: () => tablet.now(),
      newId: around.newId,
      random: () => around.chance.next(),
      subtle: webcrypto.subtle as SubtleCrypto,
      locks: tablet.locks?.of(this),
      after: (ms, then) => {
        const timer = { dueAt: around.now() + ms, then };
        this.timers.push(timer);
        return () => {
          this.timers = this.timers.filter((one) => one !== timer);
        };
      },
    });
  }

  private fetch(path: string, init: RequestInit): Promise<Response> {
    if (this.isDead) return new Promise(() => undefined);
    if (this.tablet.isAway) return Promise.reject(new TypeError('Failed to fetch'));
    return this.tablet.around.network.send({
      from: this.tablet.name,
      path,
      init,
      session: () => this.tablet.session,
      isAwaited: () => !this.isDead,
    });
  }

  start(): void {
    this.onItsPage(() => this.offline.sync.start());
  }

  /** The browser tells the page that there is a network. */
  tellOnline(): void {
    this.page.dispatchEvent(new Event('online'));
  }

  /** The sync listens on the window and the document, of which each page has its own. */
  private onItsPage(work: () => void): void {
    Object.assign(globalThis, { window: this.page, document: this.page });
    try {
      work();
    } finally {
      Reflect.deleteProperty(globalThis, 'window');
      Reflect.deleteProperty(globalThis, 'document');
    }
  }

  /** Fires what is due. */
  ring(): void {
    const due = this.timers.filter(({ dueAt }) => dueAt <= this.tablet.around.now());
    this.timers = this.timers.filter((timer) => !due.includes(timer));
    for (const { then } of due) this.tablet.around.turns.add(then);
  }

  /**
   * The page is gone in the middle of whatever it did. Its transactions are taken back, or, as far as the browser
   * had all of them already, come to their end.
   */
  kill(isTakenBack: boolean): void {
    this.isDead = true;
    this.timers = [];
    this.tablet.tabs = this.tablet.tabs.filter((tab) => tab !== this);
    this.tablet.locks?.release(this);
    if (isTakenBack) abortTransactions(this.offline.db);
    this.onItsPage(() => closeOffline(this.offline));
  }
}

interface Wish {
  tab: Tab;
  begin: () => Promise<unknown>;
}

/** Web Locks over the tabs of one tablet; a tab that is gone holds none. There is only one name of a lock. */
export class TabLocks {
  private wishes: Wish[] = [];
  private holder: Wish | undefined;

  constructor(private readonly turns: Turns) {}

  of(tab: Tab): LockManager {
    const request = (_name: string, work: () => Promise<unknown>) =>
      new Promise((resolve, reject) => {
        this.wishes.push({ tab, begin: () => work().then(resolve, reject) });
        this.next();
      });
    return { request } as unknown as LockManager;
  }

  release(tab: Tab): void {
    this.wishes = this.wishes.filter((wish) => wish.tab !== tab);
    if (this.holder?.tab === tab) this.holder = undefined;
    this.next();
  }

  private next(): void {
    if (this.holder) return;
    const wish = this.wishes.shift();
    if (!wish) return;
    this.holder = wish;
    this.turns.add(() => {
      if (this.holder !== wish) return;
      void wish.begin().finally(() => {
        if (this.holder === wish) this.holder = undefined;
        this.next();
      });
    });
  }
}
