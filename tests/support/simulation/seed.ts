/* All chance of a run comes from its seed, so that a run can be had again. */

/** Chance that is the same every time. */
export class Chance {
  private state: number;

  constructor(seed: number) {
    // Neighbouring seeds must not begin alike.
    this.state = Math.imul(seed + 1, 0x9e3779b1) >>> 0;
    for (let n = 0; n < 4; n += 1) this.next();
  }

  /** From 0 up to but not including 1. */
  next(): number {
    this.state = (this.state + 0x6d2b79f5) >>> 0;
    let mixed = Math.imul(this.state ^ (this.state >>> 15), this.state | 1);
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 0x1_0000_0000;
  }

  /** A whole number from `low` to `high`, both included. */
  between(low: number, high: number): number {
    return low + Math.floor(this.next() * (high - low + 1));
  }

  /** Whether something happens that happens so often. */
  happens(share: number): boolean {
    return this.next() < share;
  }

  pick<T>(from: readonly T[]): T {
    const one = from[Math.floor(this.next() * from.length)];
    if (one === undefined) throw new RangeError('There is nothing to pick from.');
    return one;
  }

  /** One of these, each as likely as its weight says. */
  weigh<T>(choices: readonly (readonly [weight: number, choice: T])[]): T {
    let left = this.next() * choices.reduce((sum, [weight]) => sum + weight, 0);
    for (const [weight, choice] of choices) {
      left -= weight;
      if (left < 0) return choice;
    }
    throw new RangeError('There is nothing to choose from.');
  }
}

/** Ids in the shape of a UUIDv7 that count up; `series` keeps those of different makers apart. */
export function countingIdsOf(series: number): () => string {
  let last = 0;
  const middle = (0x8000 + series).toString(16);
  return () => {
    last += 1;
    return `01970000-0000-7000-${middle}-${last.toString(16).padStart(12, '0')}`;
  };
}
