import { clearanceFromCard, taperOf, type CardBand, type CardReading } from '@/domain/clearance';
import { formatDecimal } from '@/domain/decimal';
import type { ClearanceReading, JobState, RodState } from '@/domain/job-state';
import type { EntryData } from '@/domain/entry';
import type { PlanLimit, StepOf } from '@/domain/plan';
import type { ScaleReading } from '@/components/ClearanceScale';

export type End = 'front' | 'rear';
export type GaugeStepPlan = StepOf<'gauge'>;

/** The thread in use and the card of its packet, by lot. */
export interface ThreadLots {
  thread: string;
  card: string;
}

/** What was read off the card, before it is kept. */
export interface CardValue {
  by: 'band' | 'width';
  width: string;
  clearance: string;
  uncertainty: string;
}

const UNCERTAINTY_PLACES = 4;

/** The bands of the engine's card as numbers. */
export function cardBands(state: JobState): CardBand[] {
  return state.plan.engine.card.bands.map(({ width, clearance }) => ({
    width: Number(width),
    clearance: Number(clearance),
  }));
}

/** A printed band as it was picked: its own figure, and how sure the card makes it. */
export function valueOfBand(state: JobState, index: number): CardValue | undefined {
  const band = state.plan.engine.card.bands[index];
  if (!band) return undefined;
  const { uncertainty } = clearanceFromCard(cardBands(state), Number(band.width));
  return { by: 'band', width: band.width, clearance: band.clearance, uncertainty: trimmed(uncertainty) };
}

/** A width keyed in, read between the bands; in words why not where the card can't tell. */
export function valueOfWidth(state: JobState, width: string): { value?: CardValue; error?: string } {
  try {
    const { clearance, uncertainty } = clearanceFromCard(cardBands(state), Number(width));
    const places = (state.plan.engine.card.bands[0]?.clearance.split('.')[1] ?? '').length;
    return {
      value: {
        by: 'width',
        width,
        clearance: formatDecimal(clearance, places),
        uncertainty: trimmed(uncertainty),
      },
    };
  } catch (error) {
    if (error instanceof RangeError) return { error: error.message };
    throw error;
  }
}

function trimmed(value: number): string {
  return formatDecimal(value, UNCERTAINTY_PLACES).replace(/(\.\d*?[1-9])0+$/, '$1');
}

/** The end that is read next; the first reading of an end comes before any second one. */
export function endToRead(rod: RodState | undefined, again: End | undefined): End {
  if (again !== undefined) return again;
  return rod?.front ? 'rear' : 'front';
}

/** Whether it is the first reading, the same thread once more, or a new thread. */
export function whichReading(rod: RodState | undefined, end: End): EntryData<'gauged'>['again'] {
  if (rod?.[end]) return 'read again';
  return rod?.voidReadings.some((reading) => reading.end === end && reading.why === 'measured again')
    ? 'measure again'
    : 'first';
}

/** A reading as the scale draws it. */
export function onScale(reading: ClearanceReading | undefined): ScaleReading | undefined {
  return (
    reading && {
      value: Number(reading.clearance),
      text: reading.clearance,
      uncertainty: Number(reading.uncertainty),
    }
  );
}

/** A limit as the scale draws it. */
export function limitOnScale(text: string | undefined): { value: number; text: string } | undefined {
  return text === undefined ? undefined : { value: Number(text), text };
}

/** Where an inside reading lies, as "a little tight of target 0.048". */
export function targetWords(reading: ClearanceReading, limit: PlanLimit): string {
  if (limit.target === undefined) return 'the sheet gives no target';
  const off = Number(reading.clearance) - Number(limit.target);
  if (Math.abs(off) <= Number(reading.uncertainty)) return `at target ${limit.target}`;
  const half = (Number(limit.high ?? limit.target) - Number(limit.low ?? limit.target)) / 2;
  const little = half > 0 && Math.abs(off) < half / 2 ? 'a little ' : '';
  return `${little}${off < 0 ? 'tight' : 'wide'} of target ${limit.target}`;
}

/** How the two ends differ, said no finer than the card can tell. */
export function taperWords({ front, rear }: RodState, unit: string): string | undefined {
  if (!front || !rear) return undefined;
  const asRead = ({ clearance, uncertainty }: ClearanceReading): CardReading => ({
    clearance: Number(clearance),
    uncertainty: Number(uncertainty),
  });
  const { taper, isTold } = taperOf(asRead(front), asRead(rear));
  return isTold ? `taper ${taper.toFixed(3)} ${unit}` : 'taper: within what the card can tell';
}
