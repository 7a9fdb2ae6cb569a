/*
 * A conflict between tablets, or a tablet that is lost, in words for whoever has to decide about it: what
 * happened, what waits until then, and which dispositions make sense.
 */
import type { EntryData } from './entry';
import type { Deviation, JobState, Kept } from './job-state';
import { findStep, type PlanStep } from './plan';

export type Disposition = EntryData<'deviation-disposed'>['disposition'];

export interface DeviationGuide {
  /** What happened, on which tablets and by whom. */
  happened: string;
  /** What waits until it is disposed of. */
  blocked: string;
  /** What to do before anything is decided. */
  next: string;
  /** The dispositions that make sense, and what each comes to. */
  choices: { value: Disposition; note: string }[];
}

/** What is known of a tablet by its id. */
export type TabletNames = ReadonlyMap<string, string>;

/** The guide to a deviation that tablets brought about; undefined for one that somebody or a limit raised. */
export function guideTo(
  state: JobState,
  deviation: Deviation,
  tablets: TabletNames,
): DeviationGuide | undefined {
  const kept = keptOf(state, deviation);
  if (kept === undefined) return undefined;
  if (deviation.rule === 'tablet-lost') return guideToLoss(state, kept, tablets);
  if (deviation.rule !== 'conflict') return undefined;
  const step = deviation.step === undefined ? undefined : findStep(state.plan, deviation.step);
  return { happened: deviation.words, ...guideToConflict(state, kept, step) };
}

function keptOf(state: JobState, { id }: Deviation): Kept | undefined {
  const [entry] = id.split(':');
  return allKept(state).find((kept) => kept.id === entry);
}

function allKept(state: JobState): Kept[] {
  return [...Object.values(state.steps).flatMap(({ entries }) => entries), ...state.unstepped];
}

type Rest = Omit<DeviationGuide, 'happened'>;

function guideToConflict(state: JobState, kept: Kept, step: PlanStep | undefined): Rest {
  if (isNumberTwice(state, kept)) return NUMBER_TWICE;
  if (kept.step !== undefined && step === undefined) return OTHER_PLAN;
  if (step?.kind === 'tighten') return guideToBolts(step);
  if (step === undefined) return OFF_THE_STEPS;
  const isOffOrIn = step.kind === 'remove' || step.kind === 'refit' || step.kind === 'place';
  return {
    blocked: `What comes after “${step.title}” waits.`,
    next: isOffOrIn
      ? 'Look at the vehicle, and in the tray or box: where is it now, and is all of it there? Ask both who did it.'
      : 'Ask both what they did, and look at it.',
    choices: [
      {
        value: 'accept as is',
        note: isOffOrIn
          ? 'done once, recorded twice; it is as the record says'
          : 'it is in order as it stands',
      },
      { value: 'rework', note: 'it is put right, and looked at again' },
    ],
  };
}

function guideToBolts({ title, bolts }: PlanStep & { kind: 'tighten' }): Rest {
  const all =
    bolts.length === 1 ? (bolts[0] ?? '') : `${bolts.slice(0, -1).join(', ')} and ${bolts.at(-1) ?? ''}`;
  return {
    blocked: `Nothing more is tightened at “${title}”, and what comes after it waits.`,
    next: 'Ask both what they really turned; the record counts every tightening of both. Nobody may turn these bolts meanwhile.',
    choices: [
      { value: 'rework', note: `then let ${all} off and start the cap again, under Problem` },
      { value: 'replace', note: `then let ${all} off, and fit new bolts where none is left to use` },
      { value: 'accept as is', note: 'turned once and touched on both tablets; both say so' },
      { value: 'scrap', note: 'the bolts are not used' },
    ],
  };
}

const NUMBER_TWICE: Rest = {
  blocked: 'What comes after the step waits, and the handover.',
  next: 'Take the tablet out of use and enrol it anew before anybody goes on with it. Look at both records: are both true?',
  choices: [
    { value: 'accept as is', note: 'both records are true' },
    { value: 'rework', note: 'one is not, and is done again or corrected' },
  ],
};

const OTHER_PLAN: Rest = {
  blocked: 'The handover waits. The newer plan goes on.',
  next: 'Look at what was done by the plan before: does it harm what the newer plan asks?',
  choices: [
    { value: 'accept as is', note: 'it does no harm, and stays as it was done' },
    { value: 'rework', note: 'it is put right by the newer plan' },
  ],
};

const OFF_THE_STEPS: Rest = {
  blocked: 'The handover waits.',
  next: 'Ask who recorded it what it was about.',
  choices: [
    { value: 'accept as is', note: 'it is true, and does no harm' },
    { value: 'rework', note: 'it is put right' },
  ],
};

/** Two entries of one tablet under one number: it was copied, or put back. */
function isNumberTwice(state: JobState, kept: Kept): boolean {
  return allKept(state).some(
    ({ id, device, deviceSeq }) => id !== kept.id && device === kept.device && deviceSeq === kept.deviceSeq,
  );
}

function guideToLoss(state: JobState, kept: Kept, tablets: TabletNames): DeviationGuide {
  const { tablet, from } = kept.data as EntryData<'tablet-lost'>;
  const own = allKept(state).filter(({ device }) => device === tablet);
  const people = [...new Set(own.map(({ name }) => name))].join(', ');
  const late = own.filter(({ deviceSeq }) => deviceSeq >= from).length;
  const name = tablets.get(tablet) ?? 'A tablet';
  const came =
    late === 0
      ? 'never came'
      : `had not come; ${late === 1 ? 'one of them has' : `${late} of them have`} come since`;
  return {
    happened: `${name} was declared lost. Its records from number ${from} on ${came}. On it worked: ${people === '' ? 'nobody whose records came' : people}.`,
    blocked: 'The first start and the handover wait.',
    next: 'Ask who worked with it what they did last, and look at the vehicle. What was done and is not in the record is recorded afterwards, or done again. If the tablet is found, or its file, what it held is still taken.',
    choices: [
      { value: 'accept as is', note: 'nothing is missing, or it was recorded afterwards' },
      { value: 'rework', note: 'what is missing is done again' },
    ],
  };
}
