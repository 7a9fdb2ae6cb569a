/* What of an entry can be put right on the Floor, and how: with a number pad, a list or the letters of a lot. */
import type { Entry, EntryData } from '@/domain/entry';
import { whyNotCorrectable } from '@/domain/job-correction-rules';
import type { JobState, Kept } from '@/domain/job-state';
import { findStep, type PlanStep } from '@/domain/plan';
import { judgeReading } from '@/domain/tightening';
import type { WorkshopRow } from '@/offline/database';
import { dataOf } from '../done-words';
import { cardBands, valueOfBand, valueOfWidth } from '../gauge-reading';
import { knownLots, shellLots } from '../known-lots';

type Data = Entry['data'];

/** One value of an entry, and what the entry says once the value is another. */
export interface CorrectField {
  id: string;
  label: string;
  how: 'decimal' | 'integer' | 'lot' | 'choice';
  unit?: string | undefined;
  choices?: { value: string; label: string }[] | undefined;
  /** Lots to pick from. */
  known?: string[] | undefined;
  /** As it stands; empty where nothing was recorded. */
  before: string;
  /** The entry's data with this value; undefined where it can't be so. */
  with: (value: string) => Data | undefined;
}

/** The entries of a step whose values can be put right, the newest first. */
export function correctableOn(state: JobState, step: PlanStep | undefined): Kept[] {
  const entries = (step && state.steps[step.id]?.entries) ?? [];
  return entries.filter((kept) => whyNotCorrectable(kept).ok && kept.kind !== 'done').reverse();
}

/** The values of an entry that can be put right here. */
export function fieldsOf(state: JobState, workshop: WorkshopRow, kept: Kept): CorrectField[] {
  const step = kept.step === undefined ? undefined : findStep(state.plan, kept.step);
  switch (kept.kind) {
    case 'gauged':
      return gaugedFields(state, kept);
    case 'tightened':
      return tightenedFields(workshop, step, kept);
    case 'chose-shells':
      return shellFields(state, kept);
    case 'read':
      return [number(kept, 'value', 'The reading', dataOf(kept, 'read').unit)];
    case 'filled':
      return [
        number(kept, 'quantity', 'Quantity', dataOf(kept, 'filled').unit),
        ...lotField(state, step, kept),
      ];
    case 'drive-started':
    case 'drive-ended':
      return [number(kept, 'odometer', 'Odometer', dataOf(kept, kept.kind).unit), ...checkFields(step, kept)];
    case 'counted':
    case 'removed':
      return [count(kept)];
    case 'fitted':
      return [count(kept), ...lotField(state, step, kept)];
    case 'refitted':
    case 'bolt-replaced':
      return lotField(state, step, kept);
    case 'inspected':
      return checkFields(step, kept);
    case 'watch-checked':
      return watchFields(kept);
    default:
      return [];
  }
}

function gaugedFields(state: JobState, kept: Kept): CorrectField[] {
  const data = dataOf(kept, 'gauged');
  const lots: CorrectField[] = (['threadLot', 'cardLot'] as const).flatMap((name) =>
    data[name] === undefined
      ? []
      : [
          {
            id: name,
            label: name === 'threadLot' ? 'Lot of the thread' : 'Lot of its card',
            how: 'lot' as const,
            known: knownLots(state, 'thread'),
            before: data[name],
            with: (value: string) => ({ ...data, [name]: value }),
          },
        ],
  );
  if (data.by === 'parts') return lots;
  if (data.by === 'width') {
    const width: CorrectField = {
      id: 'width',
      label: `Crushed width, ${data.end}`,
      how: 'decimal',
      unit: 'mm',
      before: data.width ?? '',
      with: (value) => {
        const read = valueOfWidth(state, value).value;
        return read && { ...data, width: value, clearance: read.clearance, uncertainty: read.uncertainty };
      },
    };
    return [width, ...lots];
  }
  const bands = cardBands(state).map((_band, index) => valueOfBand(state, index));
  const band: CorrectField = {
    id: 'band',
    label: `Band on the card, ${data.end}`,
    how: 'choice',
    choices: bands.flatMap((value) =>
      value ? [{ value: value.clearance, label: `${value.clearance} mm` }] : [],
    ),
    before: data.clearance,
    with: (value) => {
      const read = bands.find((one) => one?.clearance === value);
      return read && { ...data, clearance: read.clearance, uncertainty: read.uncertainty };
    },
  };
  return [band, ...lots];
}

function tightenedFields(workshop: WorkshopRow, step: PlanStep | undefined, kept: Kept): CorrectField[] {
  const data = dataOf(kept, 'tightened');
  const { target, value = '' } = data;
  const isAngle = target.kind === 'angle';
  const spec = { kind: target.kind, target: Number(target.target), tolerance: Number(target.tolerance) };
  const outcomes = { ok: 'done', under: 'short and continued', over: 'over' } as const;
  const reading: CorrectField = {
    id: 'value',
    label: isAngle ? 'Angle turned in this pass' : 'Torque reached',
    how: 'decimal',
    unit: isAngle ? '°' : target.unit,
    before: value,
    with: (read) => ({
      ...data,
      value: read,
      how: 'typed' as const,
      outcome: outcomes[judgeReading(spec, Number(read))],
    }),
  };
  const kind = isAngle ? 'angle gauge' : 'torque wrench';
  const tools = workshop.tools.filter((tool) => tool.kind === kind && tool.state === 'in use');
  if (step?.class !== 'A' && data.tool === undefined) return [reading];
  const tool: CorrectField = {
    id: 'tool',
    label: 'Tool',
    how: 'choice',
    choices: tools.map(({ id, name, serial }) => ({ value: id, label: `${name}, ${serial}` })),
    before: data.tool?.id ?? '',
    with: (id) => {
      const used = tools.find((one) => one.id === id);
      if (!used) return undefined;
      const { name, serial, dueOn } = used;
      return { ...data, tool: { id, name, serial, dueOn } };
    },
  };
  return [reading, tool];
}

function shellFields(state: JobState, kept: Kept): CorrectField[] {
  const data = dataOf(kept, 'chose-shells');
  const { grades } = state.plan.engine.shells;
  return (['upper', 'lower'] as const).flatMap((half): CorrectField[] => [
    {
      id: `${half}-grade`,
      label: `Grade of the ${half} shell`,
      how: 'choice',
      choices: grades.map(({ grade }) => ({ value: grade, label: grade })),
      before: data[half].grade,
      with: (grade) => ({ ...data, [half]: { ...data[half], grade } }),
    },
    {
      id: `${half}-lot`,
      label: `Lot of the ${half} shell`,
      how: 'lot',
      known: shellLots(state, data[half].grade),
      before: data[half].lot,
      with: (lot) => ({ ...data, [half]: { ...data[half], lot } }),
    },
  ]);
}

/** A figure that stands in the data under this name. */
function number(kept: Kept, name: string, label: string, unit: string): CorrectField {
  const data: Record<string, unknown> = { ...kept.data };
  return {
    id: name,
    label,
    how: 'decimal',
    unit,
    before: String(data[name]),
    // Only this field differs, and it keeps its form.
    with: (value) => ({ ...data, [name]: value }),
  };
}

function count(kept: Kept): CorrectField {
  const before = 'count' in kept.data ? kept.data.count : undefined;
  return {
    id: 'count',
    label: 'How many',
    how: 'integer',
    unit: 'counted',
    before: before === undefined ? '' : String(before),
    with: (value) => ({ ...kept.data, count: Number(value) }),
  };
}

function lotField(state: JobState, step: PlanStep | undefined, kept: Kept): CorrectField[] {
  const lot = 'lot' in kept.data ? kept.data.lot : undefined;
  const part =
    (step && 'part' in step ? step.part : undefined) ?? (kept.kind === 'bolt-replaced' ? 'bolt' : undefined);
  if (lot === undefined && part === undefined) return [];
  return [
    {
      id: 'lot',
      label: `Lot${part === undefined ? '' : ` of the ${part}`}`,
      how: 'lot',
      known: part === undefined ? [] : knownLots(state, part),
      before: lot ?? '',
      with: (value) => ({ ...kept.data, lot: value }),
    },
  ];
}

const IN_ORDER = [
  { value: 'yes', label: 'in order' },
  { value: 'no', label: 'not in order' },
];

function checkFields(step: PlanStep | undefined, kept: Kept): CorrectField[] {
  const data = kept.data as EntryData<'inspected'>;
  const asked =
    step === undefined
      ? []
      : 'checks' in step
        ? step.checks
        : step.kind === 'drive'
          ? [...step.before, ...step.after]
          : [];
  return data.checks.map(({ id, ok }) => ({
    id: `check-${id}`,
    label: asked.find((check) => check.id === id)?.ask ?? id,
    how: 'choice',
    choices: IN_ORDER,
    before: ok ? 'yes' : 'no',
    with: (value) => ({
      ...kept.data,
      checks: data.checks.map((check) => (check.id === id ? { ...check, ok: value === 'yes' } : check)),
    }),
  }));
}

function watchFields(kept: Kept): CorrectField[] {
  const data = dataOf(kept, 'watch-checked');
  const answer: CorrectField = {
    id: 'ok',
    label: 'The answer',
    how: 'choice',
    choices: IN_ORDER,
    before: data.ok ? 'yes' : 'no',
    with: (value) => ({ ...data, ok: value === 'yes' }),
  };
  return data.value === undefined
    ? [answer]
    : [number(kept, 'value', 'The reading', data.unit ?? ''), answer];
}
