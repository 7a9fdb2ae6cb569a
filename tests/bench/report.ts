/** One thing that was measured, with the limit that it is held to. */
export interface Figure {
  what: string;
  value: number;
  limit: number;
  unit: '' | 'kB' | 'ms' | '×';
  /** What it was made from, so that a reader can judge it. */
  detail: string;
}

/** How many times each comparison is made; its median counts. */
export const ROUNDS = 3;

/** Prints every figure with its limit and whether it holds. */
export function printFigures(figures: readonly Figure[]): void {
  const lines = figures.map((figure) => {
    const holds = figure.value <= figure.limit ? 'holds' : 'DOES NOT HOLD';
    return `${figure.what}\n  ${amount(figure, figure.value)}, limit ${amount(figure, figure.limit)}: ${holds}\n  ${figure.detail}`;
  });
  process.stdout.write(`\n${lines.join('\n\n')}\n\n`);
}

/** Says what is being measured, as it may take a minute. */
export function saying(words: string): void {
  process.stdout.write(`bench: ${words}\n`);
}

/** The middle value; of an even number of values the mean of the two in the middle. */
export function median(values: readonly number[]): number {
  return quantile(values, 0.5);
}

/** The value below which this share of the values lies, interpolated between neighbours. */
export function quantile(values: readonly number[], share: number): number {
  if (values.length === 0) throw new RangeError('There is no quantile of nothing.');
  const sorted = [...values].sort((a, b) => a - b);
  const place = (sorted.length - 1) * share;
  const below = sorted[Math.floor(place)] ?? 0;
  const above = sorted[Math.ceil(place)] ?? below;
  return below + (above - below) * (place - Math.floor(place));
}

/** Milliseconds that some work takes. */
export async function timed(work: () => Promise<unknown>): Promise<number> {
  const started = performance.now();
  await work();
  return performance.now() - started;
}

/** A list of measurements in words. */
export function each(values: readonly number[], digits = 0): string {
  return values.map((value) => value.toFixed(digits)).join(', ');
}

function amount({ unit }: Figure, value: number): string {
  if (unit === '×') return `${value.toFixed(2)} ×`;
  return `${unit === 'kB' ? value.toFixed(1) : value.toFixed(0)} ${unit}`;
}
