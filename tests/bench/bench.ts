import { benchBrowser } from './floor';
import { benchReplay } from './replay';
import { type Figure, printFigures } from './report';
import { benchShells } from './shells';
import { benchSync } from './sync';

/** What can be measured, by the name that it is asked for by. */
const PARTS: Readonly<Record<string, () => Promise<Figure[]>>> = {
  floor: benchBrowser,
  sync: benchSync,
  replay: benchReplay,
  shells: benchShells,
};

/** Measures what is named, or everything, and prints it. */
export async function runBench(asked: readonly string[]): Promise<void> {
  const unknown = asked.filter((name) => !(name in PARTS));
  if (unknown.length > 0) {
    throw new RangeError(
      `There is no part "${unknown.join(', ')}". Name some of: ${Object.keys(PARTS).join(', ')}.`,
    );
  }
  const figures: Figure[] = [];
  for (const [name, measure] of Object.entries(PARTS)) {
    if (asked.length === 0 || asked.includes(name)) figures.push(...(await measure()));
  }
  printFigures(figures);
}
