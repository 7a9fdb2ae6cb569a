/* The oil clearance as the sum of measured parts: the finer way where the card can't tell. */
import { clearanceFromParts, partsUncertainty } from '@/domain/clearance';
import { formatDecimal } from '@/domain/decimal';
import type { EntryData } from '@/domain/entry';
import { decimalText, isNumber } from './numbers';

export type PartName = keyof NonNullable<EntryData<'gauged'>['parts']>;
export type PartSizes = Record<PartName, string>;

/** The parts in the order in which they are measured: the bore, less everything that lies in it. */
export const PARTS: { name: PartName; title: string; short: string; how: string }[] = [
  {
    name: 'housingBore',
    title: 'Housing bore',
    short: 'bore',
    how: 'Bore gauge. Shells out, cap on and tightened, square to the joint.',
  },
  {
    name: 'upperWall',
    title: 'Upper shell wall',
    short: 'upper shell',
    how: 'Ball-ended micrometer, at the middle of the shell.',
  },
  {
    name: 'lowerWall',
    title: 'Lower shell wall',
    short: 'lower shell',
    how: 'Ball-ended micrometer, at the middle of the shell.',
  },
  {
    name: 'journal',
    title: 'Crankpin',
    short: 'crankpin',
    how: 'Micrometer, square to the joint, at this end of the pin.',
  },
];

export const NO_SIZES: PartSizes = { housingBore: '', upperWall: '', lowerWall: '', journal: '' };

/** How far one size may be off, mm, measured to a thousandth with a tool set on its standard. */
const EACH_MM = 0.001;
const LEAST_PLACES = 3;
/** No bearing has more clearance, mm: a size was misread, or is not keyed in to its end. */
const MOST_MM = 1;

/** What four sizes come to; a sentence where they can't be right; nothing while one is missing. */
export function valueOfParts(sizes: PartSizes): {
  value?: Pick<EntryData<'gauged'>, 'by' | 'clearance' | 'uncertainty'> & { by: 'parts'; parts: PartSizes };
  error?: string;
} {
  if (PARTS.some(({ name }) => !isNumber(sizes[name]))) return {};
  const parts: PartSizes = {
    housingBore: decimalText(sizes.housingBore),
    upperWall: decimalText(sizes.upperWall),
    lowerWall: decimalText(sizes.lowerWall),
    journal: decimalText(sizes.journal),
  };
  if (PARTS.some(({ name }) => Number(parts[name]) === 0)) return { error: 'A part is larger than nothing.' };
  const clearance = clearanceFromParts({
    housingBore: Number(parts.housingBore),
    upperWall: Number(parts.upperWall),
    lowerWall: Number(parts.lowerWall),
    journal: Number(parts.journal),
  });
  if (clearance <= 0)
    return { error: 'These parts would bind: the bore is too small for them. Measure again.' };
  if (clearance > MOST_MM) return { error: 'These sizes don’t belong together. Look at each again.' };
  const places = Math.max(LEAST_PLACES, ...PARTS.map(({ name }) => parts[name].split('.')[1]?.length ?? 0));
  return {
    value: {
      by: 'parts',
      clearance: formatDecimal(clearance, places),
      uncertainty: formatDecimal(partsUncertainty(EACH_MM), LEAST_PLACES),
      parts,
    },
  };
}
