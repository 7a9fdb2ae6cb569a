import type { EntryData, EntryKind } from '@/domain/entry';
import type { Kept } from '@/domain/job-state';
import { findStep, type Plan } from '@/domain/plan';
import { gradingWords } from '@/domain/wear-words';

/** "bolt 4A" for a cap bolt; the bolts of another joint have names of their own. */
export function boltName(bolt: string): string {
  return /^\d+[A-D]$/.test(bolt) ? `bolt ${bolt}` : bolt;
}

/** A torque or an angle with its unit, as "25 N·m" or "110°". */
export function amountWords(value: string, unit: string): string {
  return unit === 'deg' || unit === '°' ? `${value}°` : `${value} ${unit}`;
}

/** What an entry records, in a few words that follow "Done 10:42:". */
export function doneWords(kept: Kept, plan: Plan): string {
  const title = (kept.step === undefined ? undefined : findStep(plan, kept.step)?.title) ?? 'a record';
  switch (kept.kind) {
    case 'tightened':
      return tightenedWords(dataOf(kept, 'tightened'));
    case 'released':
      return `${boltName(dataOf(kept, 'released').bolt)} released`;
    case 'marked':
      return `${boltName(dataOf(kept, 'marked').bolt)} marked, ${dataOf(kept, 'marked').colour}`;
    case 'started-again':
      return `${dataOf(kept, 'started-again').bolts.join(' and ')} let off, starting again`;
    case 'bolt-replaced':
      return `${boltName(dataOf(kept, 'bolt-replaced').bolt)} replaced`;
    case 'gauged': {
      const { end, clearance, unit } = dataOf(kept, 'gauged');
      return `${end} read ${clearance} ${unit}`;
    }
    case 'graded':
      return `${title}: ${gradingWords(dataOf(kept, 'graded').shells)}`;
    case 'read':
      return `${title}: ${dataOf(kept, 'read').value} ${dataOf(kept, 'read').unit}`;
    case 'fitted':
    case 'refitted':
      return withLot(title, dataOf(kept, kept.kind).lot);
    case 'counted':
      return `${title}: ${dataOf(kept, 'counted').count}`;
    case 'filled':
      return `${title}: ${dataOf(kept, 'filled').quantity} ${dataOf(kept, 'filled').unit}`;
    case 'photographed':
      return `photograph: ${dataOf(kept, 'photographed').subject}`;
    case 'signed':
      return `signed by ${kept.name}: ${title}`;
    case 'deviation-raised':
      return `deviation: ${dataOf(kept, 'deviation-raised').words}`;
    case 'deviation-disposed':
      return `deviation disposed of: ${dataOf(kept, 'deviation-disposed').disposition}`;
    case 'corrected':
      return `${title}, corrected: ${dataOf(kept, 'corrected').reason}`;
    case 'taken-back':
      return `taken back: ${dataOf(kept, 'taken-back').which}`;
    case 'not-applicable':
      return `not applicable: ${title}`;
    case 'waiting-for-part':
      return `waiting for ${dataOf(kept, 'waiting-for-part').part}`;
    case 'tool-taken':
      return `${dataOf(kept, 'tool-taken').tool.name} taken in hand`;
    case 'took-over':
      return `${kept.name} took over`;
    case 'opened':
      return `job ${dataOf(kept, 'opened').number} opened`;
    default:
      return title;
  }
}

function withLot(words: string, lot: string | undefined): string {
  return lot === undefined ? words : `${words}, lot ${lot}`;
}

function tightenedWords({ bolt, target, how, value, outcome }: EntryData<'tightened'>): string {
  const name = boltName(bolt);
  if (outcome === 'over') return `${name} went too far`;
  const read = value === undefined ? undefined : amountWords(value, target.unit);
  const asked = amountWords(target.target, target.unit);
  if (outcome === 'short and continued') return `${name} stopped at ${read ?? 'short'}, went on to ${asked}`;
  if (read !== undefined && how !== 'confirmed') return `${name} read ${read}`;
  return target.kind === 'angle' ? `${name} turned ${asked}` : `${name} to ${asked}`;
}

/** The data of a remembered entry whose kind is known. */
export function dataOf<K extends EntryKind>(kept: Kept, _kind: K): EntryData<K> {
  // An entry's data was read by the schema of its kind before it came into a state.
  return kept.data as EntryData<K>;
}
