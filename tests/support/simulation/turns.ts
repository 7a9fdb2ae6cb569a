/*
 * The one queue of turns. While a run lasts, whatever the tablets put off goes into it, and nothing happens on them
 * unless a turn is taken. IndexedDB puts off by setImmediate, Dexie also by setTimeout; what WebCrypto works out on
 * another thread is handed over in the order in which it was asked for. So one seed gives one order of events.
 */

type Turn = () => void | Promise<void>;

const real = { setImmediate: globalThis.setImmediate, setTimeout: globalThis.setTimeout };
/** What tablets use of WebCrypto, the sealing of PINs included. */
const CRYPTO_WORK = [
  'sign',
  'verify',
  'generateKey',
  'importKey',
  'exportKey',
  'deriveBits',
  'deriveKey',
  'encrypt',
  'decrypt',
  'digest',
] as const;
/** More turns than any event needs; beyond it something runs in a circle. */
const ENOUGH = 200_000;

export class Turns {
  private queue: Turn[] = [];
  private isOutside = false;
  private restore: (() => void)[] = [];

  /** From here on what is put off waits for its turn. */
  install(): void {
    const { setImmediate, setTimeout } = globalThis;
    const later = (then: (...args: unknown[]) => void, ...args: unknown[]) => {
      if (this.isOutside) return real.setImmediate(then, ...args);
      this.queue.push(() => then(...args));
      return undefined;
    };
    const soon = (then: (...args: unknown[]) => void, ms?: number, ...args: unknown[]) =>
      this.isOutside || (ms ?? 0) > 0 ? real.setTimeout(then, ms, ...args) : later(then, ...args);
    globalThis.setImmediate = later as typeof setImmediate;
    globalThis.setTimeout = soon as typeof setTimeout;
    this.restore.push(() => Object.assign(globalThis, { setImmediate, setTimeout }));
    for (const name of CRYPTO_WORK) this.orderCrypto(name);
  }

  /** Ends that. */
  remove(): void {
    for (const undo of this.restore.splice(0)) undo();
    this.queue = [];
  }

  private orderCrypto(name: (typeof CRYPTO_WORK)[number]): void {
    const works = SubtleCrypto.prototype as unknown as Record<
      string,
      (...args: unknown[]) => Promise<unknown>
    >;
    const original = works[name];
    if (original === undefined) throw new Error(`WebCrypto has no ${name} here.`);
    const queueOf = () => (this.isOutside ? undefined : this.queue);
    works[name] = function (this: unknown, ...args) {
      const result = original.apply(this, args);
      const queue = queueOf();
      if (queue === undefined) return result;
      return new Promise((resolve, reject) => {
        queue.push(() => result.then(resolve, reject));
        // Whoever asked hears of a failure when its turn comes; until then it is nobody's.
        result.catch(() => undefined);
      });
    };
    this.restore.push(() => (works[name] = original));
  }

  /** Puts something off like everything else. */
  add(turn: Turn): void {
    this.queue.push(turn);
  }

  /** Takes at most so many turns. */
  async take(count: number): Promise<void> {
    await drain();
    for (let n = 0; n < count; n += 1) {
      const turn = this.queue.shift();
      if (turn === undefined) return;
      await turn();
      await drain();
    }
  }

  /** Takes turns until nothing is put off any more. */
  async rest(): Promise<void> {
    await this.take(ENOUGH);
    if (this.queue.length > 0) throw new Error(`Nothing came to rest within ${ENOUGH} turns.`);
  }

  /** Does something for which the tablets stand still: the server's part, which has time of its own. */
  async outside<T>(work: () => Promise<T>): Promise<T> {
    if (this.isOutside) return work();
    this.isOutside = true;
    try {
      return await work();
    } finally {
      this.isOutside = false;
    }
  }
}

/** Lets everything that is ready go on, to its next wait. */
function drain(): Promise<void> {
  return new Promise((resolve) => {
    real.setImmediate(resolve);
  });
}
