/*
 * The sums of the bench: what a technician works out beside a job. Nothing here is recorded, nothing is judged; each
 * says by which formula it came and where that stands. The formulas themselves live in the domain.
 */
import { clearanceFromWidth } from '@/domain/clearance';
import {
  adapterSetting,
  estimatePreload,
  nutFactorRange,
  NUT_FACTORS,
  type PropertyClass,
  strength,
  stressArea,
  travelFromAngle,
} from '@/domain/bolt';
import { convert, measureTheSame, type Unit, UNITS } from '@/domain/units';
import { figureText } from './figure-text';

/** A number that is keyed in. */
export interface SumField {
  id: string;
  title: string;
  unit: string;
  /** What it is and where it is measured. */
  how: string;
  /** May be below zero: a temperature, an angle to the other side. */
  isSigned?: true | undefined;
}

/** At least one. */
export type SumFields = readonly [SumField, ...SumField[]];

/** One of a few that is touched. */
export interface SumChoice {
  id: string;
  title: string;
  options: readonly string[];
}

/** A line of the answer. */
export interface SumLine {
  title: string;
  value: string;
  unit: string;
  /** What is read off first, largest. */
  isMain?: true | undefined;
}

/** What is keyed in and touched so far, by the ids of fields and choices. */
export interface SumInput {
  values: Readonly<Record<string, string>>;
  chosen: Readonly<Record<string, string>>;
}

/** A sum of the bench. */
export interface Sum {
  id: 'units' | 'adapter' | 'clearance' | 'bolt';
  title: string;
  /** On the key that chooses it. */
  short: string;
  choices: (input: SumInput) => readonly SumChoice[];
  fields: (input: SumInput) => SumFields;
  /** The answer from complete numbers, by field; throws a RangeError in plain words where there is none. */
  work: (numbers: Readonly<Record<string, number>>, chosen: SumInput['chosen']) => readonly SumLine[];
  formula: string;
  source: string;
  /** How far the answer may be trusted. */
  note?: string | undefined;
}

const QUANTITIES: Readonly<Record<string, Unit>> = {
  torque: 'N·m',
  length: 'mm',
  angle: 'deg',
  temperature: '°C',
  pressure: 'bar',
  distance: 'km',
  volume: 'L',
  force: 'N',
};

const unitsOf = (quantity: string): readonly Unit[] =>
  UNITS.filter((unit) => measureTheSame(unit, QUANTITIES[quantity] ?? 'N·m'));

/** The unit that a value is in: the chosen one where it belongs to the quantity, else the first of it. */
function unitIn({ chosen }: SumInput): Unit {
  const units = unitsOf(chosen.quantity ?? 'torque');
  return units.find((unit) => unit === chosen.unit) ?? units[0] ?? 'N·m';
}

const units: Sum = {
  id: 'units',
  title: 'One unit in the others',
  short: 'Units',
  choices: (input) => [
    { id: 'quantity', title: 'What', options: Object.keys(QUANTITIES) },
    { id: 'unit', title: 'Marked in', options: unitsOf(input.chosen.quantity ?? 'torque') },
  ],
  fields: (input) => [
    {
      id: 'value',
      title: 'Value',
      unit: unitIn(input),
      how: 'As it is marked on the tool or printed on the sheet.',
      ...(input.chosen.quantity === 'temperature' ? { isSigned: true } : {}),
    },
  ],
  work: ({ value = 0 }, chosen) => {
    const from = unitIn({ values: {}, chosen });
    return unitsOf(chosen.quantity ?? 'torque')
      .filter((unit) => unit !== from)
      .map((unit) => ({ title: '', value: figureText(convert(value, from, unit)), unit, isMain: true }));
  },
  formula: '1 in = 25.4 mm, 1 lbf = 4.4482216152605 N, 1 kgf = 9.80665 N, °F = 1.8 · °C + 32',
  source: 'NIST SP 811, appendix B.8: exact by definition. Five figures are shown.',
};

const adapter: Sum = {
  id: 'adapter',
  title: 'What to set the wrench to',
  short: 'Adapter',
  choices: () => [],
  fields: () => [
    { id: 'target', title: 'Torque asked', unit: 'N·m', how: 'What the bolt is to get.' },
    { id: 'wrench', title: 'L, wrench', unit: 'mm', how: 'From the middle of the hand to the square drive.' },
    {
      id: 'adapter',
      title: 'E, adapter',
      unit: 'mm',
      how: 'From the square drive to the middle of the bolt.',
    },
    {
      id: 'angle',
      title: 'α, angle',
      unit: '°',
      how: '0 straight ahead, 90 square across: then the wrench is set to the torque asked.',
    },
  ],
  work: (n) => {
    const set = adapterSetting({
      target: n.target ?? Number.NaN,
      wrenchLength: n.wrench ?? Number.NaN,
      adapterLength: n.adapter ?? Number.NaN,
      adapterAngle: n.angle ?? Number.NaN,
    });
    return [
      { title: 'Set', value: set.toFixed(1), unit: 'N·m', isMain: true },
      { title: '', value: convert(set, 'N·m', 'lbf·ft').toFixed(1), unit: 'lbf·ft' },
    ];
  },
  formula: 'set = M · L / (L + E · cos α)',
  source: 'TM 9-254, figure 4-6.',
  note: 'Hold the wrench where L was measured, or the sum does not hold.',
};

const clearance: Sum = {
  id: 'clearance',
  title: 'Clearance from the crushed width',
  short: 'Clearance',
  choices: () => [{ id: 'unit', title: 'Measured in', options: ['mm', 'in'] }],
  fields: ({ chosen }) => [
    {
      id: 'thread',
      title: 'Thread, ⌀',
      unit: chosen.unit ?? 'mm',
      how: 'Diameter of the thread before it was crushed, from its sheet.',
    },
    {
      id: 'width',
      title: 'Crushed width',
      unit: chosen.unit ?? 'mm',
      how: 'At its widest, by a rule or a loupe.',
    },
  ],
  work: ({ thread = Number.NaN, width = Number.NaN }, { unit = 'mm' }) => {
    const mm = unit === 'in' ? 25.4 : 1;
    const value = clearanceFromWidth(thread * mm, width * mm);
    return [
      { title: 'Clearance', value: value.toFixed(3), unit: 'mm', isMain: true },
      { title: '', value: (value / 25.4).toFixed(4), unit: 'in' },
    ];
  },
  formula: 'clearance = π · d² / (4 · w)',
  source: 'Geometry: the thread keeps its cross-section. Common practice, no source.',
  note: 'A sum, no reading. The card that came with the thread decides; a job’s reading is taken at its step.',
};

const bolt: Sum = {
  id: 'bolt',
  title: 'What a bolt carries',
  short: 'Bolt',
  choices: () => [
    { id: 'class', title: 'Property class', options: ['8.8', '10.9', '12.9'] },
    { id: 'state', title: 'Thread', options: Object.keys(NUT_FACTORS) },
  ],
  fields: () => [
    { id: 'diameter', title: 'Diameter', unit: 'mm', how: 'Nominal: 9 for M9.' },
    { id: 'pitch', title: 'Pitch', unit: 'mm', how: 'From crest to crest.' },
    { id: 'torque', title: 'Torque', unit: 'N·m', how: 'What it is tightened to. 0 where it is not known.' },
    { id: 'angle', title: 'Angle', unit: '°', how: 'How far it is turned after that. 0 for none.' },
  ],
  work: (n, chosen) => {
    const thread = { diameter: n.diameter ?? Number.NaN, pitch: n.pitch ?? Number.NaN };
    const propertyClass = (chosen.class ?? '8.8') as PropertyClass;
    const { proofLoad, minimumTensileLoad } = strength({ ...thread, propertyClass });
    const state = (chosen.state ?? 'lubricated') as keyof typeof NUT_FACTORS;
    const preload = estimatePreload({
      torque: n.torque ?? Number.NaN,
      diameter: thread.diameter,
      nutFactors: nutFactorRange(NUT_FACTORS[state]),
    });
    return [
      { title: 'Stress area', value: stressArea(thread).toFixed(1), unit: 'mm²' },
      { title: 'Proof load', value: inKilonewtons(proofLoad), unit: 'kN', isMain: true },
      { title: 'Breaks from', value: inKilonewtons(minimumTensileLoad), unit: 'kN' },
      {
        title: 'Preload by torque, estimate',
        value: `${inKilonewtons(preload.low)} to ${inKilonewtons(preload.high)}`,
        unit: 'kN',
      },
      {
        title: 'Travel by angle',
        value: travelFromAngle({ angle: n.angle ?? Number.NaN, pitch: thread.pitch }).toFixed(3),
        unit: 'mm',
      },
    ];
  },
  formula: 'A = π/4 · (d − 0.938194 · P)², F = T / (K · d), travel = P · angle / 360',
  source: 'ISO 898-1 clause 9.1.6.1 and tables 3 to 7; Shigley, 9th ed., equation 8-27 and table 8-15.',
  note: 'The preload is an estimate: friction moves it by a quarter either way. No limit follows from it; the maker’s programme decides.',
};

/** The sums, in the order of their keys. */
export const SUMS: readonly [Sum, ...Sum[]] = [units, adapter, clearance, bolt];

function inKilonewtons(newtons: number): string {
  return (newtons / 1000).toFixed(1);
}

/** The answer as far as it goes: lines, or why there are none yet. */
export function answerTo(sum: Sum, input: SumInput): { lines: readonly SumLine[] } | { why: string } {
  const fields = sum.fields(input);
  const missing = fields.find(({ id }) => !isComplete(input.values[id] ?? ''));
  if (missing !== undefined) return { why: `Key in: ${missing.title}.` };
  const numbers = Object.fromEntries(fields.map(({ id }) => [id, Number(input.values[id])]));
  try {
    return { lines: sum.work(numbers, input.chosen) };
  } catch (error) {
    if (error instanceof RangeError) return { why: error.message };
    throw error;
  }
}

function isComplete(typed: string): boolean {
  return /^-?\d+(\.\d+)?$/.test(typed);
}
