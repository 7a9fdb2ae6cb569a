/* What `npm run simulate` does: seed after seed, and the first that breaks in words. */
import { wordsOfResult, simulate } from './simulate';

const DEFAULT_SEEDS = 1000;
/** After so many that broke there is enough to look at. */
const ENOUGH_BROKEN = 10;

/** Runs so many seeds from one on; gives how many of them broke. */
export async function runSimulation(
  { seeds = DEFAULT_SEEDS, from = 1 }: { seeds?: number | undefined; from?: number | undefined },
  say: (words: string) => void,
): Promise<number> {
  let [broken, told] = [0, 0];
  const started = performance.now();
  for (let seed = from; seed < from + seeds && broken < ENOUGH_BROKEN; seed += 1) {
    const result = await simulate(seed);
    told += result.told;
    if (result.broken !== undefined) {
      broken += 1;
      say(wordsOfResult(result));
    }
    const done = seed - from + 1;
    if (done % 100 === 0) say(`${done} seeds, ${told} records, ${broken} broke`);
  }
  const seconds = Math.round((performance.now() - started) / 1000);
  say(`Seeds ${from} to ${from + seeds - 1}: ${told} records in ${seconds} s, ${broken} broke.`);
  return broken;
}
