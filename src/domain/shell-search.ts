/*
 * The search under the choice of shells: one shell pair for every rod from few of each. What a rod takes is
 * decided rod by rod in the order given, pair by pair in the order given, so that the first fit found is the
 * first there is in that order; a branch is left as soon as prices prove that it can't end well.
 */

/** One pair of shells that a rod may take; grades by their index. */
export interface ShellPair {
  upper: number;
  lower: number;
  /** Whether the half comes out of the stock; one that is in the rod now does not. */
  takesUpper: boolean;
  takesLower: boolean;
  /** Halves that differ from what is in the rod now. */
  changed: number;
  /** The clearance that it gives, in whole parts. */
  predicted: number;
}

/** How many shells of each grade there are, by the half that they fit. */
export interface ShellStock {
  upper: readonly number[];
  lower: readonly number[];
  either: readonly number[];
}

/** Finds the first fit, or null where there is none, with at most so many halves changed. */
export type FirstFit = (rods: readonly (readonly ShellPair[])[], mostChanged: number) => ShellPair[] | null;

/** Where all sets of grades would be too many prices, only runs of neighbours are priced. */
const MOST_GRADES_PRICED_FREELY = 4;
/** The cost of a rod that has no pair to take: more than any stock is worth. */
const NO_PAIR = 1 << 24;

/**
 * Prices for the search: each prices some upper and some lower grades at 1 and all others at 0. Whatever the
 * rods to come have to pay at least must be covered by what the stock is worth (weak duality of the linear
 * programme), and a half that is paid for is also a half changed.
 */
interface Prices {
  count: number;
  /** What a pair costs, by the grades that it takes from the stock: `takeIndex`. */
  pair: Int32Array[];
  /** What one shell of each pool is worth: upper grades, lower grades, then those that fit either half. */
  pool: Int32Array[];
}

/** A search over this stock. */
export function searchOver(stock: ShellStock): FirstFit {
  const grades = stock.upper.length;
  const prices = findPrices(grades);
  const pools = Int32Array.from([...stock.upper, ...stock.lower, ...stock.either]);
  const worth = new Int32Array(prices.count);
  pools.forEach((held, pool) => addTimes(worth, prices.pool[pool], held));
  const leastCost = makeLeastCost(prices, grades);
  return (rods, mostChanged) => {
    const bounds = boundsOf(rods.map(leastCost), prices);
    const failed = rods.map(() => new Set<string>());
    const search: Search = {
      rods,
      grades,
      prices,
      mostChanged,
      bounds,
      left: pools.slice(),
      failed,
      taken: [],
    };
    return descend(search, 0, 0, worth) ? search.taken : null;
  };
}

interface Search {
  rods: readonly (readonly ShellPair[])[];
  grades: number;
  prices: Prices;
  mostChanged: number;
  /** What the rods from each one on cost at least. */
  bounds: LeastCost[];
  /** What is left in each pool. */
  left: Int32Array;
  /** By depth, what was left where no fit was found; how many halves changed follows from it. */
  failed: Set<string>[];
  taken: ShellPair[];
}

function descend(search: Search, depth: number, changed: number, worth: Int32Array): boolean {
  if (!canEndWell(search, depth, changed, worth)) return false;
  const pairs = search.rods[depth];
  if (pairs === undefined) return true;
  const state = String.fromCharCode(...search.left);
  if (search.failed[depth]?.has(state) === true) return false;
  for (const pair of pairs) {
    const upper = pair.takesUpper ? takeFrom(search, pair.upper, 0) : -1;
    const lower = upper === null ? null : pair.takesLower ? takeFrom(search, pair.lower, 1) : -1;
    if (upper !== null && lower !== null) {
      const left = worthWithout(search, worth, upper, lower);
      search.taken[depth] = pair;
      if (descend(search, depth + 1, changed + pair.changed, left)) return true;
      giveBack(search, lower);
    }
    if (upper !== null) giveBack(search, upper);
  }
  search.failed[depth]?.add(state);
  return false;
}

/** Takes a shell out of the pool of its own half, else out of those that fit either; null where there is none. */
function takeFrom({ left, grades }: Search, grade: number, half: 0 | 1): number | null {
  const own = half * grades + grade;
  const either = 2 * grades + grade;
  const pool = (left[own] ?? 0) > 0 ? own : either;
  const held = left[pool] ?? 0;
  if (held === 0) return null;
  left[pool] = held - 1;
  return pool;
}

function giveBack({ left }: Search, pool: number): void {
  if (pool >= 0) left[pool] = (left[pool] ?? 0) + 1;
}

function worthWithout({ prices }: Search, worth: Int32Array, upper: number, lower: number): Int32Array {
  if (upper < 0 && lower < 0) return worth;
  const left = worth.slice();
  addTimes(left, prices.pool[upper], -1);
  addTimes(left, prices.pool[lower], -1);
  return left;
}

function canEndWell(
  { bounds, mostChanged }: Search,
  depth: number,
  changed: number,
  worth: Int32Array,
): boolean {
  const least = bounds[depth];
  if (least === undefined) return false;
  const { stock, withChanges } = least;
  const spare = mostChanged - changed;
  for (let price = 0; price < worth.length; price += 1) {
    const value = worth[price] ?? 0;
    if ((stock[price] ?? 0) > value || (withChanges[price] ?? 0) - value > spare) return false;
  }
  return true;
}

/** By price, what a rod costs at least, whatever pair it takes: from the stock alone, and with halves changed. */
interface LeastCost {
  stock: Int32Array;
  withChanges: Int32Array;
}

/** Works out what rods cost at least; many searches ask for the same few sets of pairs. */
function makeLeastCost(prices: Prices, grades: number): (pairs: readonly ShellPair[]) => LeastCost {
  const known = new Map<string, LeastCost>();
  return (pairs) => {
    const taken = new Map(pairs.map((pair) => [takeIndex(pair, grades), pair.changed]));
    const key = [...taken.keys()].join();
    let least = known.get(key);
    if (least === undefined) {
      least = cheapest(taken, prices);
      known.set(key, least);
    }
    return least;
  };
}

function cheapest(taken: ReadonlyMap<number, number>, prices: Prices): LeastCost {
  const stock = new Int32Array(prices.count).fill(NO_PAIR);
  const withChanges = stock.slice();
  for (const [index, changed] of taken) {
    const cost = prices.pair[index] ?? stock;
    for (let price = 0; price < cost.length; price += 1) {
      const value = cost[price] ?? 0;
      if (value < (stock[price] ?? 0)) stock[price] = value;
      if (value + changed < (withChanges[price] ?? 0)) withChanges[price] = value + changed;
    }
  }
  return { stock, withChanges };
}

/** From each rod on, what it and all rods after it cost at least. */
function boundsOf(costs: readonly LeastCost[], prices: Prices): LeastCost[] {
  const none = new Int32Array(prices.count);
  const bounds: LeastCost[] = [{ stock: none, withChanges: none }];
  for (const { stock, withChanges } of costs.toReversed()) {
    const after = bounds[0];
    bounds.unshift({ stock: sum(stock, after?.stock), withChanges: sum(withChanges, after?.withChanges) });
  }
  return bounds;
}

function sum(one: Int32Array, other: Int32Array | undefined): Int32Array {
  const both = one.slice();
  addTimes(both, other, 1);
  return both;
}

function takeIndex({ upper, lower, takesUpper, takesLower }: ShellPair, grades: number): number {
  return (takesUpper ? upper : grades) * (grades + 1) + (takesLower ? lower : grades);
}

const pricesFor = new Map<number, Prices>();

/** The prices for so many grades, made once. */
function findPrices(grades: number): Prices {
  const known = pricesFor.get(grades) ?? makePrices(grades);
  pricesFor.set(grades, known);
  return known;
}

function makePrices(grades: number): Prices {
  const sets = gradeSets(grades);
  const priced = sets.flatMap((upper) => sets.map((lower) => ({ upper, lower })));
  const has = (set: number, grade: number): number => (set >> grade) & 1;
  const all = Array.from({ length: grades + 1 }, (_, grade) => grade);
  const real = all.slice(0, grades);
  return {
    count: priced.length,
    pair: all.flatMap((u) =>
      all.map((l) => Int32Array.from(priced, ({ upper, lower }) => has(upper, u) + has(lower, l))),
    ),
    pool: [
      ...real.map((g) => Int32Array.from(priced, ({ upper }) => has(upper, g))),
      ...real.map((g) => Int32Array.from(priced, ({ lower }) => has(lower, g))),
      ...real.map((g) => Int32Array.from(priced, ({ upper, lower }) => has(upper | lower, g))),
    ],
  };
}

/** Sets of grades as bits: all there are, or where that would be too many, the runs of neighbours. */
function gradeSets(grades: number): number[] {
  if (grades <= MOST_GRADES_PRICED_FREELY) return Array.from({ length: 1 << grades }, (_, set) => set);
  const runs = [0];
  for (let from = 0; from < grades; from += 1) {
    for (let to = from + 1; to <= grades; to += 1) runs.push(((1 << to) - 1) & ~((1 << from) - 1));
  }
  return runs;
}

function addTimes(sum: Int32Array, more: Int32Array | undefined, times: number): void {
  if (more === undefined || times === 0) return;
  for (let at = 0; at < sum.length; at += 1) sum[at] = (sum[at] ?? 0) + times * (more[at] ?? 0);
}
